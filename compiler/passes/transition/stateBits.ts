import { type Literal, type LogicState, TRUE } from '../../logic/logic.js';
import type { LogicBuilder } from '../../logic/logicBuilder.js';
import type { Prover } from '../../logic/prover.js';
import { mayBeOne, mayBeZero, type NetValue, pair } from './algebra.js';

/** The state bits of a transition: made on demand, the same for all cycles. */
export class StateBits {
  readonly list: LogicState[] = [];
  readonly #logic: LogicBuilder;
  readonly #prover: Prover;
  readonly #threeValued: boolean;
  readonly #inputs = new Map<number, NetValue>();
  #started: Literal | undefined;

  /** `prover` is told what it may take for granted of the bits. */
  constructor(logic: LogicBuilder, threeValued: boolean, prover: Prover) {
    this.#logic = logic;
    this.#prover = prover;
    this.#threeValued = threeValued;
  }

  /** What a state element of the circuit holds at the start of the cycle. */
  element(index: number): NetValue {
    const one = this.#bit({ role: 'value', index });
    return this.#threeValued ? this.#pair(one, { role: 'zero', index }) : one;
  }

  /** What bit `index` of the stimulus row was in the cycle before. */
  previousInput(index: number): NetValue {
    const known = this.#inputs.get(index);
    if (known !== undefined) return known;
    const one = this.#bit({ role: 'input', index });
    const value = this.#threeValued ? this.#pair(one, { role: 'inputZero', index }) : one;
    this.#inputs.set(index, value);
    return value;
  }

  /** 0 in the first cycle, 1 afterwards. */
  started(): NetValue {
    this.#started ??= this.#bit({ role: 'started', index: 0 });
    return this.#threeValued ? pair(this.#started, this.#started ^ 1) : this.#started;
  }

  /** The next value of every bit, for a cycle that ends with these values of the elements. */
  nextOf(elements: ArrayLike<NetValue>, input: (index: number) => NetValue): Literal[] {
    const one = (value: NetValue): Literal => (this.#threeValued ? mayBeOne(value) : value);
    return this.list.map(({ role, index }) => {
      if (role === 'value') return one(elements[index]!);
      if (role === 'zero') return mayBeZero(elements[index]!);
      if (role === 'input') return one(input(index));
      return role === 'inputZero' ? mayBeZero(input(index)) : TRUE;
    });
  }

  #pair(one: Literal, other: LogicState): NetValue {
    const zero = this.#bit(other);
    this.#prover.assumeEither(one, zero);
    return pair(one, zero);
  }

  #bit(state: LogicState): Literal {
    return this.#logic.state(this.list.push(state) - 1);
  }
}
