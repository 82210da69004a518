import type { Algebra, NetValue } from './algebra.js';
import { type DriverContext, driverValue } from './driver.js';

/** Evaluates the nets of a combinational loop in rounds, in any algebra. */
export class Rounds {
  readonly #context: DriverContext;
  readonly #nets: Uint32Array;
  readonly #outside: (net: number) => NetValue;
  readonly #placeOf = new Map<number, number>();

  /** `nets` in the order of evaluation; `outside` gives what they read and the loop does not hold. */
  constructor(context: DriverContext, nets: Uint32Array, outside: (net: number) => NetValue) {
    this.#context = context;
    this.#nets = nets;
    this.#outside = outside;
    for (const [place, net] of nets.entries()) this.#placeOf.set(net, place);
  }

  get #algebra(): Algebra {
    return this.#context.algebra;
  }

  /** Runs rounds until one changes nothing, at most `limit`; tells how many changed something. */
  run(start: readonly NetValue[], limit: number): { values: NetValue[]; rounds: number } {
    return this.#run(start, limit, (_, computed) => computed);
  }

  /**
   * Ternary settling: what the loop remembers becomes x where it can change, and x spreads; then
   * what is decided leaves x. Either half takes at most a round for each net that remembers.
   */
  runTernary(start: readonly NetValue[], remembers: (net: number) => boolean): NetValue[] {
    const limit = this.#nets.filter(remembers).length + 1;
    const spread = this.#run(start, limit, (old, computed, net) =>
      remembers(net) ? this.#algebra.merge(old, computed) : computed,
    );
    return this.run(spread.values, limit).values;
  }

  #run(
    start: readonly NetValue[],
    limit: number,
    combine: (old: NetValue, computed: NetValue, net: number) => NetValue,
  ): { values: NetValue[]; rounds: number } {
    const values = [...start];
    const value = (net: number): NetValue => {
      const place = this.#placeOf.get(net);
      return place === undefined ? this.#outside(net) : values[place]!;
    };
    for (let round = 0; round < limit; round++) {
      let changed = false;
      for (const [place, net] of this.#nets.entries()) {
        const old = values[place]!;
        // What a latch or register of the loop showed last is what it holds.
        const next = combine(old, driverValue(this.#context, net, value, old), net);
        if (next !== old) changed = true;
        values[place] = next;
      }
      if (!changed) return { values, rounds: round };
    }
    return { values, rounds: limit };
  }
}
