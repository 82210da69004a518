import { describe, expect, it } from 'vitest';
import { lockStates } from '../../benchmarks/circuits/machine.js';
import { engineNames } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues, type ReadPort } from '../support/portValues.js';

type Place = (typeof lockStates)[number];
type Inputs = Readonly<Record<string, number>>;

interface Move {
  readonly to: Place;
  /** Cycles that must have gone by since the place was entered. */
  readonly after?: number;
  readonly when?: (inputs: Inputs) => boolean;
}

const times = { gate: 7, water: 30, dwell: 12 };
const called = (i: Inputs) => (i.call_below === 1 || i.call_above === 1) && i.doorway_clear === 1;

// What the lock is for, place by place; where two moves are possible the first one is made.
const story: Readonly<Record<Place, readonly Move[]>> = {
  open_below: [{ to: 'closing_below', after: times.dwell, when: called }],
  closing_below: [{ to: 'filling', after: times.gate }],
  filling: [
    { to: 'opening_above', when: (i) => i.level_high === 1 },
    { to: 'alarm', after: times.water },
  ],
  opening_above: [{ to: 'open_above', after: times.gate }],
  open_above: [{ to: 'closing_above', after: times.dwell, when: called }],
  closing_above: [{ to: 'draining', after: times.gate }],
  draining: [
    { to: 'opening_below', when: (i) => i.level_low === 1 },
    { to: 'alarm', after: times.water },
  ],
  opening_below: [{ to: 'open_below', after: times.gate }],
  alarm: [{ to: 'draining', when: (i) => i.acknowledge === 1 }],
};

/** The places that the story passes, one a cycle; the first has been open for long. */
function placesOf(rows: readonly Inputs[]): Place[] {
  let place: Place = 'open_below';
  let age = Number.POSITIVE_INFINITY;
  return rows.map((inputs) => {
    const before = place;
    const move = story[place].find(
      ({ after = 0, when }) => age >= after && (when === undefined || when(inputs)),
    );
    age = move === undefined ? age + 1 : 0;
    place = move?.to ?? place;
    return before;
  });
}

const placeIn = (read: ReadPort, cycle: number): string =>
  lockStates.filter((_, i) => (read('state', cycle) >> BigInt(i)) & 1n).join(' and ');

describe('the canal lock', () => {
  it.each(engineNames)('follows its story for 10,000 random cycles, on %s', async (name) => {
    const random = new RandomBits(1815);
    const oneIn = (n: number) => Number(random.next() % n === 0);
    const rows = Array.from({ length: 10_000 }, () => ({
      call_below: oneIn(6),
      call_above: oneIn(6),
      doorway_clear: 1 - oneIn(3),
      level_high: oneIn(25),
      level_low: oneIn(25),
      acknowledge: oneIn(6),
    }));
    const read = playValues(await poweredEngine(ownDesign('lock', times), name), [
      { reset: 1 },
      ...rows.map((row, i): PortValues => (i === 0 ? { ...row, reset: 0 } : row)),
    ]);
    const places = placesOf(rows);
    expect(new Set(places).size).toBe(lockStates.length);
    expect(rows.map((_, i) => placeIn(read, i + 1))).toEqual(places);
    expect(rows.map((_, i) => read('horn', i + 1))).toEqual(
      places.map((place) => BigInt(place === 'alarm')),
    );
  });

  it('takes a boat up in the time that its parts take', async () => {
    // By hand, from the usual times: a gate moves for 200 cycles and one, and stands open for 500
    // and one; the water needs 1,000 here.
    const rows: PortValues[] = [
      { reset: 1, doorway_clear: 1 },
      { reset: 0, call_below: 1 },
      { call_below: 0, call_above: 1 },
    ];
    const closed = 2 + 201;
    const filled = closed + 1000;
    const open = filled + 201;
    while (rows.length <= open + 501) {
      rows.push({ level_high: Number(rows.length >= filled - 1) });
    }
    const read = playValues(await poweredEngine(ownDesign('lock'), 'wasm'), rows);
    const seen = [
      1,
      2,
      closed - 1,
      closed,
      filled - 1,
      filled,
      open - 1,
      open,
      open + 500,
      open + 501,
    ];
    expect(seen.map((cycle) => placeIn(read, cycle))).toEqual([
      'open_below',
      'closing_below',
      'closing_below',
      'filling',
      'filling',
      'opening_above',
      'opening_above',
      'open_above',
      'open_above',
      'closing_above',
    ]);
  });
});
