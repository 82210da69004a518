import type { BusCheck, Circuit } from '../../circuit/circuit.js';
import type { Design } from '../../compile.js';
import type { BusEvent } from './busEvent.js';
import type { Findings, Outlet, OutletBlock, OutletPlan, WatchedPlace } from './outlet.js';

/** Watches the buses of a circuit; no plan where it has none. */
export function watchBuses({ circuit }: Design): OutletPlan[] {
  const { checks } = circuit;
  if (checks.length === 0) return [];
  const watch = checks.map(({ when }) => when);
  return [
    {
      watch,
      open: ({ watched, saved }) => new BusWatch(circuit, watched, saved as SavedWatch | undefined),
    },
  ];
}

/** First cycles and counts, one for each check. */
interface SavedWatch {
  readonly first: readonly number[];
  readonly cycles: readonly number[];
}

class BusWatch implements Outlet {
  readonly wantsResponse = true;
  readonly interest = 'none';
  readonly #circuit: Circuit;
  readonly #place: WatchedPlace;
  readonly #first: Float64Array;
  readonly #cycles: Float64Array;

  constructor(circuit: Circuit, place: WatchedPlace, saved?: SavedWatch) {
    this.#circuit = circuit;
    this.#place = place;
    this.#first = new Float64Array(circuit.checks.length).fill(-1);
    this.#cycles = new Float64Array(circuit.checks.length);
    if (saved === undefined) return;
    this.#first.set(saved.first);
    this.#cycles.set(saved.cycles);
  }

  save(): SavedWatch {
    return { first: Array.from(this.#first), cycles: Array.from(this.#cycles) };
  }

  // A condition that is x has 0 in place of its value, and is none.
  take({ firstCycle, cycles, watched }: OutletBlock): undefined {
    const { firstWord, stride } = this.#place;
    for (let row = 0; row < cycles; row++) {
      for (let check = 0; check < this.#first.length; check += 32) {
        let set = watched[row * stride + firstWord + (check >>> 5)]!;
        for (; set !== 0; set &= set - 1) {
          const bit = check + 31 - Math.clz32(set & -set);
          // What pads the last word repeats the first condition.
          if (bit >= this.#first.length) break;
          if (this.#first[bit]! < 0) this.#first[bit] = firstCycle + row;
          this.#cycles[bit]!++;
        }
      }
    }
  }

  finish(): Findings {
    const events = this.#circuit.checks.flatMap((check, i): BusEvent[] => {
      if (this.#first[i]! < 0) return [];
      const { name: bus, kind } = check;
      const seen = { bus, kind, firstCycle: this.#first[i]!, cycles: this.#cycles[i]! };
      return [{ ...seen, ...placeOf(this.#circuit, check) }];
    });
    return { buses: events.sort((p, q) => p.firstCycle - q.firstCycle) };
  }

  discard(): void {
    // It holds nothing but counts.
  }
}

function placeOf({ sources }: Circuit, { sourceIndex, offset }: BusCheck) {
  const source = sources[sourceIndex];
  return source === undefined ? {} : { file: source.path, ...source.place(offset) };
}
