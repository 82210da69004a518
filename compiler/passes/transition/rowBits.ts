import type { Circuit } from '../../circuit/circuit.js';
import type { ClockPorts } from '../../circuit/clockPorts.js';
import { inputRowNets } from '../../circuit/modelLayout.js';
import type { LogicBuilder } from '../../logic/logicBuilder.js';
import type { Prover } from '../../logic/prover.js';
import { type NetValue, pair } from './algebra.js';

/** Where each data input stands in the stimulus row, and what it is worth as logic. */
export class RowBits {
  /** Bits of the row that logic inputs number: both groups where x is possible. */
  readonly count: number;
  readonly #bitOf = new Map<number, number>();
  readonly #logic: LogicBuilder;
  readonly #prover: Prover;
  readonly #unknownGroup: number;

  /** `prover` is told what it may take for granted of the bits. */
  constructor(
    circuit: Circuit,
    clocks: ClockPorts,
    logic: LogicBuilder,
    threeValued: boolean,
    prover: Prover,
  ) {
    this.#logic = logic;
    this.#prover = prover;
    const nets = inputRowNets(circuit, clocks);
    for (const [bit, net] of nets.entries()) this.#bitOf.set(net, bit);
    const group = ((nets.length + 31) >>> 5) * 32;
    this.#unknownGroup = threeValued ? group : 0;
    this.count = threeValued ? group * 2 : nets.length;
  }

  /** The bit of an input net in the row. */
  bitOf(net: number): number {
    return this.#bitOf.get(net)!;
  }

  /** The value of a bit of this cycle's row. */
  value(bit: number): NetValue {
    const one = this.#logic.input(bit);
    if (this.#unknownGroup === 0) return one;
    // The row has 0 as the value of an unknown bit, so "not 1" already means "may be 0".
    const unknown = this.#logic.input(this.#unknownGroup + bit);
    this.#prover.assumeNotBoth(one, unknown);
    return pair(this.#logic.or(one, unknown), one ^ 1);
  }
}
