import type { Circuit } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import { type Pulses, pulsesOf } from '../../circuit/pulses.js';
import { X } from '../../circuit/values.js';
import type { Settler } from './settler.js';
import type { Change } from './tableWatch.js';
import { merge, withSetReset } from './values.js';

/** Looks after registers that set or reset themselves, and those that their pulses reach. */
export class PulseWatch {
  readonly #circuit: Circuit;
  readonly #settler: Settler;
  readonly #pulses: Pulses;
  /** What set and reset of guarded registers were at the last look, two numbers a register. */
  readonly #seen: Uint8Array;

  constructor(circuit: Circuit, settler: Settler) {
    this.#circuit = circuit;
    this.#settler = settler;
    this.#pulses = pulsesOf(circuit);
    const { isGuarded } = this.#pulses;
    this.#seen = new Uint8Array(isGuarded.includes(1) ? 2 * isGuarded.length : 0);
  }

  /** Takes the present values of set and reset for those before the next wave. */
  forget(): void {
    const { set, reset } = this.#circuit.registers;
    for (let r = 0; 2 * r < this.#seen.length; r++) {
      this.#seen[2 * r] = this.#pin(set[r]!);
      this.#seen[2 * r + 1] = this.#pin(reset[r]!);
    }
  }

  /**
   * What set and reset make of the registers on which they act in waves. Where waves are
   * `endless`, what would change is x. Cells that go by a table are left to `TableWatch`.
   */
  look(endless: boolean): Change[] {
    const acting = this.#acting().filter(({ net }) => this.#settler.tables.of(net) < 0);
    return endless ? acting.map(({ net }) => ({ net, value: X })) : acting;
  }

  /**
   * After waves without end in a three-valued run: makes x what set and reset may yet change. They
   * only ever take knowledge away, so that this comes to an end.
   */
  rest(): void {
    const settler = this.#settler;
    for (let acting = this.#acting(); acting.length > 0; acting = this.#acting()) {
      for (const { net, value } of acting) settler.set(net, merge(settler.value[net]!, value));
      settler.settle();
    }
  }

  #acting(): Change[] {
    const { value, tables, evaluator } = this.#settler;
    return this.#pulses.delayed
      .map((register) => {
        const net = this.#circuit.registers.output[register]!;
        const entry = tables.of(net);
        const next =
          entry < 0
            ? evaluator.register(register, value[net]!)
            : evaluator.tableValue(entry, value[net]!);
        return { net, value: next };
      })
      .filter((change) => change.value !== value[change.net]);
  }

  /** What a register is that may hold anything: its set and reset act on it, unless in waves. */
  doubted(register: number): number {
    const isDelayed = this.#pulses.isDelayed[register] === 1;
    return isDelayed ? X : this.#settler.evaluator.register(register, X);
  }

  /** The data of a register whose set or reset was still active when its edge came. */
  guarded(register: number, data: number): number {
    if (this.#pulses.isGuarded[register] !== 1) return data;
    const [set, reset] = [this.#seen[2 * register]!, this.#seen[2 * register + 1]!];
    const { priority } = this.#circuit.registers;
    return withSetReset(data, set, reset, priority[register]!, this.#settler.unknown);
  }

  #pin(net: number): number {
    return net === NO_NET ? 0 : this.#settler.value[net]!;
  }
}
