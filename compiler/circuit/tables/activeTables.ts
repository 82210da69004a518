import type { Circuit } from '../circuit.js';
import { loopsOf } from '../loops.js';
import type { CellTable, TableForm } from './cellTable.js';
import { Leaf } from './diagram.js';

/** The tables that a run of two or of three values goes by. */
export class ActiveTables {
  /** The entries of `Circuit.tables` that count. */
  readonly entries: Uint32Array;
  readonly #circuit: Circuit;
  readonly #threeValued: boolean;
  readonly #entryOf: Int32Array | undefined;

  constructor(circuit: Circuit, threeValued: boolean) {
    this.#circuit = circuit;
    this.#threeValued = threeValued;
    const { count, output } = circuit.tables;
    const all = Uint32Array.from({ length: count }, (_, entry) => entry);
    this.entries = all.filter((entry) => threeValued || this.table(entry).two !== undefined);
    if (this.entries.length === 0) return;
    this.#entryOf = new Int32Array(circuit.netCount).fill(-1);
    for (const entry of this.entries) this.#entryOf[output[entry]!] = entry;
  }

  /** The entry that a net's value goes by, or -1. */
  of(net: number): number {
    return this.#entryOf?.[net] ?? -1;
  }

  table(entry: number): CellTable {
    const { definitions, definition } = this.#circuit.tables;
    return definitions[definition[entry]!]!;
  }

  form(entry: number): TableForm {
    const { two, three } = this.table(entry);
    return this.#threeValued ? three : two!;
  }

  /** What acts at once, as a function in the diagram of the form. */
  settled(entry: number): number {
    const { settled, looped } = this.form(entry);
    return loopsOf(this.#circuit).loopOf[this.output(entry)]! >= 0 ? looped : settled;
  }

  /** The net at an input of an entry. */
  input(entry: number, place: number): number {
    const { inputStart, input } = this.#circuit.tables;
    return input[inputStart[entry]! + place]!;
  }

  output(entry: number): number {
    return this.#circuit.tables.output[entry]!;
  }

  /** The inputs of an entry whose changes do anything. */
  movers(entry: number): number[] {
    const { events } = this.form(entry);
    return [...events.keys()].filter((input) => events[input] !== Leaf.Hold);
  }
}
