import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { pulsesOf } from '../../circuit/pulses.js';
import { beforeOf, stateOf } from '../../circuit/tables/tableRows.js';
import { X } from '../../circuit/values.js';
import type { Settler } from './settler.js';

/** A net and what it is to become. */
export interface Change {
  readonly net: number;
  readonly value: number;
}

/** Watches the inputs of cells that go by a table for the changes that move them. */
export class TableWatch {
  readonly #settler: Settler;
  /** Per watched net: the entries of `Circuit.tables` that its changes may move. */
  readonly #entries = new Map<number, number[]>();
  /** Values of all inputs when changes were last looked for. */
  readonly #seen = new Map<number, number>();
  /** Entries whose set or reset acts in waves. */
  readonly #delayed: number[] = [];
  /** Entries to which `Pulses.isGuarded` applies. */
  readonly #guarded = new Set<number>();

  constructor(circuit: Circuit, settler: Settler) {
    this.#settler = settler;
    const { tables, dependencies } = settler;
    const { isDelayed, isGuarded } = pulsesOf(circuit);
    for (const entry of tables.entries) {
      const movers = tables.movers(entry);
      for (const place of movers) this.#watch(tables.input(entry, place), entry);
      const output = tables.output(entry);
      const isRegister = circuit.kind[output] === GateKind.Register;
      const register = dependencies.elementOf[output]!;
      if (isRegister && isDelayed[register] === 1) this.#delayed.push(entry);
      else if (movers.length === 0) continue;
      if (isRegister && isGuarded[register] === 1) this.#guarded.add(entry);
      for (let place = 0; place < tables.table(entry).inputs; place++)
        this.#seen.set(tables.input(entry, place), 0);
    }
  }

  #watch(net: number, entry: number): void {
    const known = this.#entries.get(net);
    if (known === undefined) this.#entries.set(net, [entry]);
    else if (known.at(-1) !== entry) known.push(entry);
  }

  /** Takes the present values for those before the next change. */
  forget(): void {
    const { value } = this.#settler;
    for (const net of this.#seen.keys()) this.#seen.set(net, value[net]!);
  }

  /**
   * What cells are to hold after what has changed since the last look. `isFirst` tells that inputs
   * or clock ports have moved, and no capture. Where waves are `endless`, what would change is x.
   */
  look(isFirst: boolean, endless: boolean): Change[] {
    const { value, tables, evaluator } = this.#settler;
    const moved = new Set(this.#delayed);
    for (const [net, entries] of this.#entries) {
      if (this.#seen.get(net) === value[net]) continue;
      for (const entry of entries) moved.add(entry);
    }
    const changes: Change[] = [];
    for (const entry of moved) {
      const net = tables.output(entry);
      const held = this.#next(entry, isFirst);
      const isGuarded = !isFirst && this.#guarded.has(entry);
      const next = evaluator.tableValue(entry, isGuarded ? this.#shownBefore(entry, held) : held);
      if (next === value[net]) continue;
      const doubted = this.#delayed.includes(entry) ? X : evaluator.tableValue(entry, X);
      changes.push({ net, value: endless ? doubted : next });
    }
    this.forget();
    return changes;
  }

  /** What the levels of the last look would make of a held value. */
  #shownBefore(entry: number, held: number): number {
    const { tables } = this.#settler;
    const state = stateOf(tables.table(entry).inputs);
    return tables
      .form(entry)
      .diagram.walk(tables.settled(entry), (variable) =>
        variable === state ? held : this.#seen.get(tables.input(entry, variable))!,
      );
  }

  // One input after another, in the order of `CellTable`.
  #next(entry: number, isFirst: boolean): number {
    const { value, tables } = this.#settler;
    const { inputs, first, later } = tables.table(entry);
    const { diagram, events } = tables.form(entry);
    const levels = Array.from(
      { length: inputs },
      (_, i) => this.#seen.get(tables.input(entry, i))!,
    );
    let state = value[tables.output(entry)]!;
    for (const place of isFirst ? first : later) {
      const before = levels[place]!;
      levels[place] = value[tables.input(entry, place)]!;
      if (levels[place] === before) continue;
      state = diagram.walk(events[place]!, (variable) => {
        if (variable === stateOf(inputs)) return state;
        return variable === beforeOf(inputs) ? before : levels[variable]!;
      });
    }
    return state;
  }
}
