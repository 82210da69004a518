import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { NO_NET } from '../../circuit/ids.js';
import { loopsOf } from '../../circuit/loops.js';
import type { ActiveTables } from '../../circuit/tables/activeTables.js';
import { stateOf } from '../../circuit/tables/tableRows.js';
import type { ReferenceMemories } from './memories.js';
import { AND, choose, NOT, OR, type ValueTable, withSetReset, XOR } from './values.js';

/** Computes single nets of a circuit from the values of all nets. */
export class Evaluator {
  readonly #circuit: Circuit;
  readonly #elementOf: Uint32Array;
  readonly #value: Uint8Array;
  readonly #unknown: number;
  readonly #memories: ReferenceMemories;
  readonly #tables: ActiveTables;
  readonly #delayed: Uint8Array;

  /** Reads `value` at each call. `unknown` is what a constant x reads as: 2, or 0 if two-valued. */
  constructor(
    circuit: Circuit,
    elementOf: Uint32Array,
    value: Uint8Array,
    unknown: number,
    memories: ReferenceMemories,
    tables: ActiveTables,
  ) {
    this.#circuit = circuit;
    this.#elementOf = elementOf;
    this.#value = value;
    this.#unknown = unknown;
    this.#memories = memories;
    this.#tables = tables;
    this.#delayed = loopsOf(circuit).delayed;
  }

  /** What a net's driver makes of the present values. An input and what is held stay. */
  evaluate(net: number): number {
    if (this.#isDelayed(net)) return this.#value[net]!;
    const entry = this.#tables.of(net);
    if (entry >= 0) return this.tableValue(entry, this.#value[net]!);
    switch (this.#circuit.kind[net]) {
      case GateKind.Zero:
        return 0;
      case GateKind.One:
        return 1;
      case GateKind.Unknown:
        return this.#unknown;
      case GateKind.Register:
        return this.register(this.#elementOf[net]!, this.#value[net]!);
      case GateKind.Latch:
        return this.#latch(this.#elementOf[net]!, this.#value[net]!);
      case GateKind.Buf:
      case GateKind.And:
        return this.#fold(net, AND);
      case GateKind.Not:
      case GateKind.Nand:
        return NOT[this.#fold(net, AND)]!;
      case GateKind.Or:
        return this.#fold(net, OR);
      case GateKind.Nor:
        return NOT[this.#fold(net, OR)]!;
      case GateKind.Xor:
        return this.#fold(net, XOR);
      case GateKind.Xnor:
        return NOT[this.#fold(net, XOR)]!;
      case GateKind.Mux:
        return this.#mux(net);
      case GateKind.CaseEqual:
        return this.#caseEqual(net);
      case GateKind.MemoryRead:
        return this.#memories.read(net);
      default:
        return this.#value[net]!;
    }
  }

  /** Set and reset act on it in waves, and not while the logic settles. */
  #isDelayed(net: number): boolean {
    const isRegister = this.#circuit.kind[net] === GateKind.Register;
    return isRegister && this.#delayed[this.#elementOf[net]!] === 1;
  }

  /** What a cell that goes by a table shows if it holds `held`. */
  tableValue(entry: number, held: number): number {
    const tables = this.#tables;
    const { diagram } = tables.form(entry);
    const state = stateOf(tables.table(entry).inputs);
    return diagram.walk(tables.settled(entry), (variable) =>
      variable === state ? held : this.#value[tables.input(entry, variable)]!,
    );
  }

  /** What a register shows that would hold `held` if set and reset were inactive. */
  register(index: number, held: number): number {
    const { set, reset, priority } = this.#circuit.registers;
    const setValue = this.#pin(set[index]!);
    return withSetReset(held, setValue, this.#pin(reset[index]!), priority[index]!, this.#unknown);
  }

  #latch(index: number, held: number): number {
    const { enable, data, set, reset, priority } = this.#circuit.latches;
    const passed = choose(this.#pin(enable[index]!), held, this.#pin(data[index]!));
    const setValue = this.#pin(set[index]!);
    return withSetReset(
      passed,
      setValue,
      this.#pin(reset[index]!),
      priority[index]!,
      this.#unknown,
    );
  }

  #pin(net: number): number {
    return net === NO_NET ? 0 : this.#value[net]!;
  }

  #fold(net: number, table: ValueTable): number {
    const { faninStart, fanin } = this.#circuit;
    const end = faninStart[net + 1]!;
    let result = this.#value[fanin[faninStart[net]!]!]!;
    for (let i = faninStart[net]! + 1; i < end; i++) {
      result = table[result * 3 + this.#value[fanin[i]!]!]!;
    }
    return result;
  }

  #caseEqual(net: number): number {
    const { faninStart, fanin } = this.#circuit;
    const first = faninStart[net]!;
    return this.#value[fanin[first]!] === this.#value[fanin[first + 1]!] ? 1 : 0;
  }

  #mux(net: number): number {
    const { faninStart, fanin } = this.#circuit;
    const first = faninStart[net]!;
    const value = this.#value;
    return choose(value[fanin[first]!]!, value[fanin[first + 1]!]!, value[fanin[first + 2]!]!);
  }
}
