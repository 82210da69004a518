/**
 * What the parcel sorter is specified to do; times are in ticks of 10 ms, one a clock cycle.
 *
 * The belt carries one parcel a slot. Each parcel has a lane: 1 to 3 for a diverter, 0 for the end
 * of the belt. The diverter of its lane opens for it in the middle of the slot in which it passes.
 * After every service interval, counted from power-up, the belt stops for a service.
 */
export const sorter = {
  tickBits: 20,
  /** Ticks from one service to the next: 43 min 20 s. */
  serviceInterval: 260_000,
  /** Ticks that a service lasts. */
  serviceTicks: 1000,
  /** Ticks of running belt in a slot. */
  slotTicks: 24,
  /** A diverter is open in the ticks of a slot from this one ... */
  openFrom: 6,
  /** ... and before this one. */
  openUntil: 18,
  /** How many slots behind the scanner the diverters of lanes 1, 2 and 3 are. */
  stations: [3, 6, 9],
} as const;

const rowsPerChunk = 2000;

/**
 * The specified response of the first `cycles` cycles as an expectation in CSV, chunk by chunk:
 * the columns `cycle`, `belt_ready` and `divert`, with a row for each cycle in which one of them
 * changes and one for the cycle after.
 */
export function* sorterExpectation(cycles: number): Generator<string> {
  let rows = ['cycle,belt_ready,divert'];
  const lanes = parcelLanes();
  let beltTicks = 0;
  let before = -1;
  let changedBefore = false;
  for (let cycle = 0; cycle < cycles; cycle++) {
    const ready = beltRuns(cycle);
    const divert = ready ? openDiverters(beltTicks++, lanes) : 0;
    const now = divert * 2 + Number(ready);
    const changed = now !== before;
    if (changed || changedBefore) rows.push(`${cycle},${Number(ready)},0x${divert}`);
    changedBefore = changed;
    before = now;
    if (rows.length >= rowsPerChunk) {
      yield `${rows.join('\n')}\n`;
      rows = [];
    }
  }
  if (rows.length > 0) yield `${rows.join('\n')}\n`;
}

// A service begins in the cycle after its due tick.
function beltRuns(cycle: number): boolean {
  const sinceDue = cycle % sorter.serviceInterval;
  const firstIsPast = cycle > sorter.serviceInterval;
  return !(firstIsPast && sinceDue >= 1 && sinceDue <= sorter.serviceTicks);
}

function openDiverters(beltTicks: number, lanes: readonly number[]): number {
  const phase = beltTicks % sorter.slotTicks;
  if (phase < sorter.openFrom || phase >= sorter.openUntil) return 0;
  const slot = Math.floor(beltTicks / sorter.slotTicks);
  return sorter.stations.reduce((open, station, i) => {
    const parcel = slot - station;
    const arrives = parcel >= 0 && lanes[parcel % lanes.length] === i + 1;
    return arrives ? open | (1 << i) : open;
  }, 0);
}

// The scanner's lanes: the two newest bits of the sequence b[n] = b[n-6] xor b[n-7] from all
// ones, which repeats after 127 parcels.
function parcelLanes(): number[] {
  const bits = new Array<number>(7).fill(1);
  while (bits.length < 127 + 7) bits.push(bits.at(-6)! ^ bits.at(-7)!);
  return Array.from({ length: 127 }, (_, parcel) => bits[parcel + 6]! | (bits[parcel + 5]! << 1));
}
