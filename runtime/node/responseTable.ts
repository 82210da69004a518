import { type ModelLayout, rowStride } from '../layout.js';
import type { ResponseBlock } from '../stream.js';
import { longestValue, writeValue } from '../valueText.js';
import { type ResponseChoice, ResponseChooser } from './responseChoice.js';

const COMMA = 0x2c;
const LF = 0x0a;
const ZERO = 0x30;
/** Digits of the largest cycle number, and a line end. */
const LONGEST_REST = 17;
const PIECE = 1 << 18;

/**
 * Writes responses as comma-separated values: `cycle`, then the output ports in declaration order,
 * or those chosen.
 *
 * One-bit ports are `0`, `1`, `x`, wider ones `0x…`, or `0b…` where a bit is x. Lines end in LF.
 */
export class ResponseTable {
  readonly #layout: ModelLayout;
  readonly #stride: number;
  readonly #longestRow: number;
  readonly #bytes: Uint8Array;
  readonly #chooser: ResponseChooser;

  /** Throws as `ResponseChooser` does. */
  constructor(layout: ModelLayout, choice: ResponseChoice = {}) {
    this.#layout = layout;
    this.#chooser = new ResponseChooser(layout, choice);
    this.#stride = rowStride(layout.outputs, layout.threeValued);
    const widths = this.#chooser.columns.map(({ width }) => longestValue(width) + 1);
    this.#longestRow = widths.reduce((sum, width) => sum + width, LONGEST_REST);
    this.#bytes = new Uint8Array(Math.max(PIECE, this.#longestRow));
  }

  /** The line of names. */
  header(): Uint8Array {
    const names = this.#chooser.columns.map(({ name }) => quoted(name));
    return new TextEncoder().encode(`${['cycle', ...names].join(',')}\n`);
  }

  /** The rows of a block, in pieces; each is good until the next one is asked for. */
  *rows({ firstCycle, cycles, rows }: ResponseBlock): Generator<Uint8Array, void, undefined> {
    let end = 0;
    for (let i = 0; i < cycles; i++) {
      if (!this.#chooser.takes(firstCycle + i, rows, i * this.#stride)) continue;
      if (end + this.#longestRow > this.#bytes.length) {
        yield this.#bytes.subarray(0, end);
        end = 0;
      }
      end = this.#row(end, firstCycle + i, rows, i * this.#stride);
    }
    if (end > 0) yield this.#bytes.subarray(0, end);
  }

  #row(start: number, cycle: number, rows: Uint32Array, at: number): number {
    const { outputs, threeValued } = this.#layout;
    const unknownAt = threeValued ? at + outputs.words : undefined;
    let end = writeDecimal(this.#bytes, start, cycle);
    for (const column of this.#chooser.columns) {
      this.#bytes[end++] = COMMA;
      end = writeValue(this.#bytes, end, column, rows, at, unknownAt);
    }
    this.#bytes[end++] = LF;
    return end;
  }
}

function writeDecimal(bytes: Uint8Array, start: number, number: number): number {
  let digits = 1;
  for (let bound = 10; number >= bound; bound *= 10) digits++;
  let rest = number;
  for (let at = start + digits - 1; at >= start; at--) {
    const tenth = Math.floor(rest / 10);
    bytes[at] = ZERO + (rest - tenth * 10);
    rest = tenth;
  }
  return start + digits;
}

const quoted = (name: string): string =>
  /[",\r\n]/.test(name) ? `"${name.replaceAll('"', '""')}"` : name;
