import type { DerivedState } from '../../../runtime/stateBits.js';
import { FALSE, type Literal, type Logic, LogicOp } from '../../logic/logic.js';
import { LogicBuilder, type LogicOptions } from '../../logic/logicBuilder.js';
import { builtNode } from '../../logic/rebuild.js';
import { mapEffects } from '../../logic/sinks.js';
import { WindowProof } from '../../logic/windowProof.js';
import { signaturesOf } from './signatures.js';

/** Nodes walked in all rounds together; beyond that the graph is left as it is. */
const BUDGET = 6_000_000;
/** Values of 32 combinations that the proofs of a round may compute. */
const PROOF_BUDGET = 2_000_000;

/** A graph with fewer state bits, and what became of the others. */
export interface Merged {
  readonly logic: Logic;
  readonly derived: readonly DerivedState[];
}

/**
 * Merges state bits that are equal, or opposite, in every state that can follow from the one given,
 * and replaces those that never change by constants.
 *
 * Bits that behave alike in a random simulation are assumed to be equal, the graph is built under
 * that assumption, and classes whose next values differ are split, until none is: an induction over
 * the cycles (C. van Eijk, "Sequential equivalence checking without state space traversal", DATE
 * 1998, with structural hashing and windows as the proof). The result holds for runs from that state
 * only. A graph with memories is left as it is.
 */
export function mergeRegisters(
  logic: Logic,
  start: Uint8Array,
  options: LogicOptions = {},
): Merged {
  const unchanged = { logic, derived: [] };
  if (logic.states.length === 0 || hasMemory(logic)) return unchanged;
  let classes = Classes.of(signaturesOf(logic, start));
  for (let walked = logic.nodeCount; walked < BUDGET; walked += logic.nodeCount) {
    const build = new Build(logic, start, classes, options);
    const finer = classes.split(build.next, start);
    if (finer.count === classes.count) {
      return classes.count === logic.states.length + 1 ? unchanged : build.merged();
    }
    classes = finer;
  }
  return unchanged;
}

const hasMemory = (logic: Logic): boolean =>
  logic.writes.length > 0 || logic.op.some((op) => op > LogicOp.Mux);

/** State bits that are taken to be equal. Class 0 holds those that never change. */
class Classes {
  readonly of: Uint32Array;
  readonly count: number;

  private constructor(of: Uint32Array, count: number) {
    this.of = of;
    this.count = count;
  }

  static of(signatures: Float64Array): Classes {
    const numbers = new Map([[0, 0]]);
    const of = Uint32Array.from(signatures, (signature) => {
      if (!numbers.has(signature)) numbers.set(signature, numbers.size);
      return numbers.get(signature)!;
    });
    return new Classes(of, numbers.size);
  }

  /** Classes of bits that had one class before and have one next value, from their start on. */
  split(next: readonly Literal[], start: Uint8Array): Classes {
    const numbers = new Map([['0 0', 0]]);
    const of = Uint32Array.from(next, (literal, bit) => {
      const key = `${this.of[bit]} ${literal ^ start[bit]!}`;
      if (!numbers.has(key)) numbers.set(key, numbers.size);
      return numbers.get(key)!;
    });
    return new Classes(of, numbers.size);
  }
}

/** The graph under the assumption that the bits of each class are equal. */
class Build {
  readonly next: readonly Literal[];
  readonly #logic: Logic;
  readonly #start: Uint8Array;
  readonly #classes: Classes;
  readonly #builder: LogicBuilder;
  /** Per class its first bit, and the place of that bit in the new graph. */
  readonly #leader: Int32Array;
  readonly #place: Int32Array;
  readonly #literals: Uint32Array;

  constructor(logic: Logic, start: Uint8Array, classes: Classes, options: LogicOptions) {
    this.#builder = new LogicBuilder(options);
    this.#logic = logic;
    this.#start = start;
    this.#classes = classes;
    this.#leader = new Int32Array(classes.count).fill(-1);
    this.#place = new Int32Array(classes.count).fill(-1);
    let places = 0;
    for (let bit = 0; bit < classes.of.length; bit++) {
      const number = classes.of[bit]!;
      if (number === 0 || this.#leader[number]! >= 0) continue;
      this.#leader[number] = bit;
      this.#place[number] = places++;
    }
    this.#literals = new Uint32Array(logic.nodeCount);
    for (let node = 1; node < logic.nodeCount; node++) {
      this.#literals[node] =
        logic.op[node] === LogicOp.State
          ? this.#state(logic.a[node]!)
          : builtNode(this.#builder, logic, node, (literal) => this.#moved(literal));
    }
    this.next = this.#sameNext(logic.next.map((literal) => this.#moved(literal)));
  }

  // Next values that are built differently but are those of the first bit of the class.
  #sameNext(next: readonly Literal[]): Literal[] {
    const proof = new WindowProof(this.#builder, PROOF_BUDGET);
    return next.map((literal, bit) => {
      const number = this.#classes.of[bit]!;
      const leader = this.#leader[number]!;
      const turned = this.#start[bit]! ^ (number === 0 ? 0 : this.#start[leader]!);
      const like = (number === 0 ? FALSE : next[leader]!) ^ turned;
      return literal !== like && proof.areEqual(literal, like) ? like : literal;
    });
  }

  merged(): Merged {
    const logic = this.#logic;
    const leaders = [...this.#leader].filter((bit) => bit >= 0);
    const columns = this.#builder.take();
    const derived: DerivedState[] = [];
    for (const [bit, state] of logic.states.entries()) {
      const number = this.#classes.of[bit]!;
      const leader = this.#leader[number]!;
      if (number !== 0 && leader === bit) continue;
      const inverted = (this.#start[bit]! ^ (number === 0 ? 0 : this.#start[leader]!)) === 1;
      derived.push({ ...state, inverted, ...(number !== 0 && { of: logic.states[leader]! }) });
    }
    return {
      logic: {
        ...logic,
        ...columns,
        nodeCount: columns.op.length,
        outputs: logic.outputs.map((literal) => this.#moved(literal)),
        next: leaders.map((bit) => this.next[bit]!),
        states: leaders.map((bit) => logic.states[bit]!),
        ...mapEffects(logic, (literal) => this.#moved(literal)),
      },
      derived,
    };
  }

  #state(bit: number): Literal {
    const number = this.#classes.of[bit]!;
    if (number === 0) return FALSE ^ this.#start[bit]!;
    const turned = this.#start[bit]! ^ this.#start[this.#leader[number]!]!;
    return this.#builder.state(this.#place[number]!) ^ turned;
  }

  #moved(literal: Literal): Literal {
    return this.#literals[literal >>> 1]! ^ (literal & 1);
  }
}
