import { GrowableUint32 } from '../growable.js';
import type { NetId } from '../ids.js';
import type { CellTable } from './cellTable.js';

/**
 * The tables of cells, one entry of each array for each cell that has one.
 *
 * A table tells exactly what becomes of a net that a register, a latch or a gate drives; these
 * stand for it wherever `CellTable` says that two values need no more. The inputs of entry i are
 * `input[inputStart[i]] … input[inputStart[i + 1] - 1]`.
 */
export interface Tables {
  readonly count: number;
  readonly output: Uint32Array;
  /** Index into `definitions`. */
  readonly definition: Uint32Array;
  /** count + 1 entries. */
  readonly inputStart: Uint32Array;
  readonly input: Uint32Array;
  readonly definitions: readonly CellTable[];
}

/** Collects the tables of a circuit. */
export class TableColumns {
  readonly #output = new GrowableUint32();
  readonly #definition = new GrowableUint32();
  readonly #inputStart = new GrowableUint32();
  readonly #input = new GrowableUint32();
  readonly #definitions = new Map<CellTable, number>();

  add(output: NetId, inputs: readonly NetId[], table: CellTable): void {
    const index = this.#definitions.get(table) ?? this.#definitions.size;
    this.#definitions.set(table, index);
    this.#output.push(output);
    this.#definition.push(index);
    this.#inputStart.push(this.#input.length);
    for (const net of inputs) this.#input.push(net);
  }

  /** Lets tables that stand for certain nets stand for others. */
  moveOutputs(moved: ReadonlyMap<number, NetId>): void {
    for (let i = 0; i < this.#output.length; i++) {
      const to = moved.get(this.#output.get(i));
      if (to !== undefined) this.#output.set(i, to);
    }
  }

  /** Sets the marks of all nets that tables without another form read. */
  markReads(isRead: Uint8Array): void {
    const needed = [...this.#definitions.keys()].map(({ two }) => two !== undefined);
    for (let i = 0; i < this.#output.length; i++) {
      if (needed[this.#definition.get(i)] !== true) continue;
      const next =
        i + 1 < this.#inputStart.length ? this.#inputStart.get(i + 1) : this.#input.length;
      for (let at = this.#inputStart.get(i); at < next; at++) isRead[this.#input.get(at)] = 1;
    }
  }

  take(): Tables {
    this.#inputStart.push(this.#input.length);
    return {
      count: this.#output.length,
      output: this.#output.take(),
      definition: this.#definition.take(),
      inputStart: this.#inputStart.take(),
      input: this.#input.take(),
      definitions: [...this.#definitions.keys()],
    };
  }
}
