import { type BitCopy, copyBits } from '../../bitCopies.js';
import { type ModelLayout, rowStride } from '../../layout.js';
import { RowGatherer } from '../../rowGatherer.js';
import { blockCycles, type StimulusBlock } from '../../stream.js';
import type { TableBytes } from '../bytes/inputBytes.js';
import { wholeFileError } from '../fileForm.js';
import { columnsIn, copiesTo, refuseClocks } from './columnCopies.js';
import { groupWords, type PackedShape, rowWords } from './packedHeader.js';
import { cycleAt, cycleError, PackedInput } from './packedInput.js';

/**
 * Reads packed rows as a stimulus, in constant memory; see `packedHeader.ts` for the form.
 *
 * Ports that it has no column for are held at 0. Rows with cycles last until the next one; before
 * the first, all is 0. Reads the file at `path`, or `bytes` if given. Throws `FileError`, also for
 * an x in a two-valued model, and what the file system throws.
 */
export async function* readPackedStimulus(
  path: string,
  layout: ModelLayout,
  bytes?: TableBytes,
): AsyncGenerator<StimulusBlock, void, undefined> {
  const input = await PackedInput.open(path, bytes);
  try {
    refuseClocks(path, input.shape, layout);
    const columns = columnsIn(path, input.shape, layout.inputs);
    const rows = new PackedRows(path, input.shape, layout, copiesTo(columns));
    let first = 0;
    for (let words = await input.next(); words !== undefined; words = await input.next()) {
      rows.check(words, first);
      yield* input.shape.numbered ? rows.lasting(words) : rows.plain(words);
      first = input.rows;
    }
    if (input.shape.numbered) yield* rows.last();
  } finally {
    await input.close();
  }
}

/** Turns rows of a file into rows of a model. */
class PackedRows {
  readonly #path: string;
  readonly #shape: PackedShape;
  readonly #copies: readonly BitCopy[];
  readonly #isThreeValued: boolean;
  /** Words of a row and of a group in the file, and in the model. */
  readonly #from: number;
  readonly #fromGroup: number;
  readonly #to: number;
  readonly #toGroup: number;
  /** Whether rows can be handed on as they are. */
  readonly #isSame: boolean;
  readonly #rows: Uint32Array;
  readonly #most: number;
  /** With cycles: the row that lasts until the next one, and its cycle; all 0 before the first. */
  readonly #gatherer: RowGatherer;
  #cycle = 0;
  #isFirst = true;

  constructor(path: string, shape: PackedShape, layout: ModelLayout, copies: readonly BitCopy[]) {
    const { inputs, threeValued } = layout;
    this.#path = path;
    this.#shape = shape;
    this.#copies = copies;
    this.#isThreeValued = threeValued;
    this.#from = rowWords(shape);
    this.#fromGroup = groupWords(shape);
    this.#to = rowStride(inputs, threeValued);
    this.#toGroup = inputs.words;
    const isWhole = copies.length === 1 && copies[0]!.to === 0 && copies[0]!.width === inputs.bits;
    this.#isSame = isWhole && (shape.threeValued || !threeValued) && !shape.numbered;
    this.#most = blockCycles(this.#to);
    this.#rows = new Uint32Array(this.#isSame ? 0 : this.#most * this.#to);
    this.#gatherer = new RowGatherer(this.#to);
  }

  /** Looks for an x where none can be, and takes the value from each bit that is x. */
  check(words: Uint32Array, firstRow: number): void {
    if (!this.#shape.threeValued) return;
    const values = this.#shape.numbered ? 2 : 0;
    for (let at = values; at < words.length; at += this.#from) {
      for (let word = at; word < at + this.#fromGroup; word++) {
        const unknown = words[word + this.#fromGroup]!;
        if (unknown === 0) continue;
        words[word]! &= ~unknown;
        if (this.#isThreeValued) continue;
        const row = firstRow + Math.floor(at / this.#from);
        throw wholeFileError(this.#path, `row ${row} has an x, which needs a three-valued run`);
      }
    }
  }

  /** Rows that last a cycle each. */
  *plain(words: Uint32Array): Generator<StimulusBlock> {
    const count = words.length / this.#from;
    if (this.#isSame) {
      yield { cycles: count, rows: words, stride: this.#from };
      return;
    }
    for (let done = 0; done < count; ) {
      const cycles = Math.min(this.#most, count - done);
      for (let i = 0; i < cycles; i++) this.#copy(words, (done + i) * this.#from, this.#rows, i);
      yield { cycles, rows: this.#rows, stride: this.#to };
      done += cycles;
    }
  }

  /** Rows that last until the next one. */
  *lasting(words: Uint32Array): Generator<StimulusBlock> {
    const gatherer = this.#gatherer;
    for (let at = 0; at < words.length; at += this.#from) {
      const cycle = cycleAt(words, at);
      const isLater = cycle > this.#cycle || (this.#isFirst && cycle === 0);
      if (!isLater || !Number.isSafeInteger(cycle)) {
        throw cycleError(this.#path, cycle, this.#cycle);
      }
      const lasted = cycle - this.#cycle;
      if (lasted > 0 && gatherer.add(lasted)) yield* gatherer.take();
      this.#copy(words, at + 2, gatherer.row, 0);
      this.#cycle = cycle;
      this.#isFirst = false;
    }
    yield* gatherer.take();
  }

  /** The last row, which lasts a cycle. */
  *last(): Generator<StimulusBlock> {
    if (this.#isFirst) return;
    this.#gatherer.add(1);
    yield* this.#gatherer.take();
  }

  #copy(from: Uint32Array, fromAt: number, to: Uint32Array, row: number): void {
    const toAt = row * this.#to;
    copyBits(this.#copies, from, fromAt, to, toAt);
    if (!this.#isThreeValued || !this.#shape.threeValued) return;
    copyBits(this.#copies, from, fromAt + this.#fromGroup, to, toAt + this.#toGroup);
  }
}
