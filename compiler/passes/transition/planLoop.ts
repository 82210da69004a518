import { roundLimit } from '../../circuit/loops.js';
import { type Algebra, type NetValue, scalar } from './algebra.js';
import type { DriverContext } from './driver.js';
import { Rounds } from './rounds.js';

/** How a loop is to be unrolled. */
export interface LoopPlan {
  /** Rounds after which it has settled, where it settles at all. */
  readonly rounds: number;
  /** Whether it settles in that many rounds whatever it reads. */
  readonly isProven: boolean;
  /** Whether it may settle in more rounds. */
  readonly isCut: boolean;
}

/** Combinations tried; all of them where there are no more than this. */
const TRIALS = 2187;
/** Net evaluations spent on one loop; large loops are tried on fewer combinations. */
const BUDGET = 2_000_000;
/** Where a sample takes no more rounds, there is hardly a combination that does. */
const FEW_ROUNDS = 3;
/** Net evaluations that more rounds than those of the sample may be unrolled into. */
const MOST_UNROLLED = 100_000;

/**
 * Tries a loop out on plain values: all combinations of what it reads and remembers, or a random
 * sample. Values that are the same literal, or its inverse, are one variable; constants are none.
 *
 * A sample tells little of a loop along which values go far, net by net, in a few combinations. A
 * round decides at least one more of the `remembered` nets there, so that it is given as many.
 */
export function planLoop(
  context: DriverContext,
  nets: Uint32Array,
  remembered: number,
  start: readonly NetValue[],
  outsideNets: Uint32Array,
  outside: (net: number) => NetValue,
): LoopPlan {
  const variables = new Variables(context.algebra);
  const startAs = start.map((value) => variables.add(value));
  const outsideAs = new Map(Array.from(outsideNets, (net) => [net, variables.add(outside(net))]));
  const algebra = scalar(context.algebra.hasUnknown);
  const values = (trial: Uint8Array, source: Source): NetValue =>
    source.variable < 0
      ? source.constant
      : source.isInverse
        ? algebra.not(trial[source.variable]!)
        : trial[source.variable]!;
  const limit = roundLimit(nets.length);
  const trials = new Trials(variables.count, algebra.hasUnknown ? 3 : 2, nets.length);
  let rounds = 0;
  let settles = true;
  for (const trial of trials.all()) {
    const run = new Rounds({ ...context, algebra }, nets, (net) =>
      values(trial, outsideAs.get(net)!),
    ).run(
      startAs.map((source) => values(trial, source)),
      limit,
    );
    if (run.rounds === limit) settles = false;
    else rounds = Math.max(rounds, run.rounds);
  }
  if (trials.areExhaustive) return { rounds, isProven: settles, isCut: false };
  const enough = remembered + 1;
  const isAffordable = enough * nets.length <= MOST_UNROLLED;
  if (rounds > FEW_ROUNDS && isAffordable) rounds = Math.max(rounds, enough);
  return { rounds, isProven: false, isCut: rounds < limit };
}

/** A value as a constant, a variable, or a variable's inverse. */
interface Source {
  readonly variable: number;
  readonly isInverse: boolean;
  readonly constant: NetValue;
}

class Variables {
  count = 0;
  readonly #algebra: Algebra;
  readonly #known = new Map<NetValue, Source>();

  constructor(algebra: Algebra) {
    this.#algebra = algebra;
    const constant = (of: number): Source => ({ variable: -1, isInverse: false, constant: of });
    if (algebra.hasUnknown) this.#known.set(algebra.unknown, constant(2));
    this.#known.set(algebra.zero, constant(0)).set(algebra.one, constant(1));
  }

  add(value: NetValue): Source {
    const known = this.#known.get(value);
    if (known !== undefined) return known;
    const made = { variable: this.count++, isInverse: false, constant: 0 };
    this.#known.set(value, made);
    this.#known.set(this.#algebra.not(value), { ...made, isInverse: true });
    return made;
  }
}

class Trials {
  readonly areExhaustive: boolean;
  readonly #variables: number;
  readonly #values: number;
  readonly #count: number;

  constructor(variables: number, values: number, netCount: number) {
    this.#variables = variables;
    this.#values = values;
    const combinations = values ** variables;
    this.areExhaustive = combinations <= TRIALS;
    const affordable = Math.ceil(BUDGET / (netCount * netCount));
    this.#count = this.areExhaustive ? combinations : Math.min(TRIALS, affordable);
  }

  *all(): Generator<Uint8Array> {
    const trial = new Uint8Array(this.#variables);
    // Numerical Recipes' linear congruential generator; its high bits are random enough here.
    let random = 1;
    for (let t = 0; t < this.#count; t++) {
      for (let v = 0, rest = t; v < this.#variables; v++) {
        random = (Math.imul(random, 1664525) + 1013904223) >>> 0;
        trial[v] = this.areExhaustive ? rest % this.#values : (random >>> 16) % this.#values;
        rest = Math.floor(rest / this.#values);
      }
      yield trial;
    }
  }
}
