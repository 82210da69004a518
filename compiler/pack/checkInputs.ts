import { RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { columnWords, type PlacedColumn } from '../../runtime/model/columns.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';
import type { Design } from '../compile.js';
import type { ReferenceEngine } from '../interpret/reference/referenceEngine.js';
import type { ResetPort } from './resets.js';

/** The random inputs with which a package is checked. */
export class CheckInputs {
  readonly #design: Design;
  readonly #resets: readonly ResetPort[];
  readonly #random: RandomBits;

  constructor(design: Design, resets: readonly ResetPort[], seed: number) {
    this.#design = design;
    this.#resets = resets;
    this.#random = new RandomBits(seed);
  }

  /** Packed rows of the next cycles, the first of which is cycle `first`. */
  rows(cycles: number, first: number): Uint32Array {
    const { inputs, threeValued } = this.#design.layout;
    const stride = rowStride(inputs, threeValued);
    const rows = new Uint32Array(cycles * stride);
    fillRandomRows(this.#random, inputs, rows, cycles, stride);
    for (const { name, active } of this.#resets) {
      const port = inputs.ports.find((each) => each.name === name);
      if (port === undefined) continue;
      for (let i = 0; i < cycles; i++) {
        if (first + i < 2 || (first + i) % 256 === 0) continue;
        const word = i * stride + (port.offset >>> 5);
        const bit = 1 << (port.offset & 31);
        rows[word] = active === 1 ? rows[word]! & ~bit : rows[word]! | bit;
      }
    }
    if (threeValued) this.#addUnknown(rows, cycles, first);
    return rows;
  }

  // One cycle in eight has x in some of its inputs.
  #addUnknown(rows: Uint32Array, cycles: number, first: number): void {
    const { words, bits } = this.#design.layout.inputs;
    for (let i = 0; i < cycles; i++) {
      if ((first + i) % 8 !== 7) continue;
      for (let word = 0; word < words; word++) {
        const inRow = word === words - 1 && bits % 32 !== 0 ? (1 << (bits % 32)) - 1 : -1;
        const unknown = this.#random.next() & this.#random.next() & inRow;
        rows[i * 2 * words + word]! &= ~unknown;
        rows[i * 2 * words + words + word] = unknown;
      }
    }
  }
}

/** What the reference gives for some cycles. */
export interface Expected {
  readonly failed: boolean;
  /** Cycles before the one that has no result. */
  readonly completed: number;
  readonly rows: Uint32Array;
}

/** Runs the reference on packed rows. */
export function expectedOf(
  reference: ReferenceEngine,
  cycles: number,
  stimulus: Uint32Array,
): Expected {
  const { inputs, outputs, threeValued } = reference.layout;
  const rows = new Uint32Array(cycles * rowStride(outputs, threeValued));
  try {
    reference.run(cycles, stimulus, rowStride(inputs, threeValued), rows);
    return { failed: false, completed: cycles, rows };
  } catch (error) {
    if (!(error instanceof RunFault)) throw error;
    return { failed: true, completed: error.completed, rows };
  }
}

/** Columns of zeros. */
export const emptyColumns = (
  ports: readonly PlacedColumn['port'][],
  cycles: number,
  group: number,
): PlacedColumn[] =>
  ports.map((port) => ({ port, column: new Uint32Array(cycles * columnWords(port)), group }));

/** Columns by the names of their ports. */
export const byName = (columns: readonly PlacedColumn[]) =>
  Object.fromEntries(columns.map(({ port, column }) => [port.name, column]));
