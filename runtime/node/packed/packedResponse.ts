import { type BitCopy, copyBits } from '../../bitCopies.js';
import { type ModelLayout, rowStride } from '../../layout.js';
import type { ResponseBlock } from '../../stream.js';
import { type ResponseChoice, ResponseChooser } from '../responseChoice.js';
import { copiesFrom } from './columnCopies.js';
import { groupWords, type PackedShape, packedHeader, rowWords } from './packedHeader.js';

const PIECE_WORDS = 1 << 16;
const IS_BIG_ENDIAN = new Uint8Array(Uint32Array.of(1).buffer)[0] === 0;

/** Writes responses as packed rows; see `packedHeader.ts` for the form. */
export class PackedResponse {
  readonly #layout: ModelLayout;
  readonly #chooser: ResponseChooser;
  readonly #shape: PackedShape;
  readonly #copies: readonly BitCopy[];
  readonly #words: Uint32Array;
  readonly #rowWords: number;
  readonly #groupWords: number;
  readonly #isSame: boolean;

  /** Rows have cycles where some are left out. Throws as `ResponseChooser` does. */
  constructor(layout: ModelLayout, choice: ResponseChoice = {}) {
    this.#layout = layout;
    this.#chooser = new ResponseChooser(layout, choice);
    const { columns, isEveryRow } = this.#chooser;
    this.#shape = { columns, threeValued: layout.threeValued, numbered: !isEveryRow };
    this.#copies = copiesFrom(columns);
    this.#rowWords = rowWords(this.#shape);
    this.#groupWords = groupWords(this.#shape);
    this.#words = new Uint32Array(Math.max(PIECE_WORDS, this.#rowWords));
    const [only] = this.#copies;
    this.#isSame =
      isEveryRow &&
      !IS_BIG_ENDIAN &&
      this.#copies.length === 1 &&
      only!.from === 0 &&
      only!.width === layout.outputs.bits;
  }

  /** The bytes before the rows. */
  header(): Uint8Array {
    return packedHeader(this.#shape);
  }

  /** The rows of a block, in pieces; each is good until the next one is asked for. */
  *rows(block: ResponseBlock): Generator<Uint8Array, void, undefined> {
    if (this.#isSame) yield bytesOf(block.rows);
    else yield* this.#chosen(block);
  }

  *#chosen({ firstCycle, cycles, rows }: ResponseBlock): Generator<Uint8Array, void, undefined> {
    const { outputs, threeValued } = this.#layout;
    const stride = rowStride(outputs, threeValued);
    let end = 0;
    for (let i = 0; i < cycles; i++) {
      const at = i * stride;
      if (!this.#chooser.takes(firstCycle + i, rows, at)) continue;
      if (end + this.#rowWords > this.#words.length) {
        yield this.#piece(end);
        end = 0;
      }
      this.#words.fill(0, end, end + this.#rowWords);
      let to = end;
      if (this.#shape.numbered) {
        this.#words[to++] = firstCycle + i;
        this.#words[to++] = (firstCycle + i) / 0x1_0000_0000;
      }
      copyBits(this.#copies, rows, at, this.#words, to);
      if (threeValued) {
        copyBits(this.#copies, rows, at + outputs.words, this.#words, to + this.#groupWords);
      }
      end += this.#rowWords;
    }
    if (end > 0) yield this.#piece(end);
  }

  #piece(end: number): Uint8Array {
    const bytes = bytesOf(this.#words.subarray(0, end));
    if (IS_BIG_ENDIAN) Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).swap32();
    return bytes;
  }
}

const bytesOf = ({ buffer, byteOffset, byteLength }: Uint32Array): Uint8Array =>
  new Uint8Array(buffer, byteOffset, byteLength);
