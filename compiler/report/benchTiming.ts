import type { Contestant } from './benchEngines.js';
import { fiveDigits, type Timing } from './benchResult.js';

interface TimingOptions {
  readonly seconds: number;
  readonly rounds: number;
  readonly onProgress: (step: string) => void;
}

/**
 * Measures the contestants in rounds in which each has its turn, so that a machine that grows
 * slower or faster meanwhile does so for all. `seconds` is for each of them, all rounds together.
 */
export async function timeAlternately(
  contestants: readonly Contestant[],
  { seconds, rounds, onProgress }: TimingOptions,
): Promise<Timing[]> {
  const roundNs = (seconds / rounds) * 1e9;
  const cycles: number[] = [];
  for (const contestant of contestants) {
    onProgress(`warming up: ${contestant.name}`);
    cycles.push(Math.max(1, Math.round(roundNs / (await warmUp(contestant, roundNs)))));
  }
  const samples = contestants.map((): number[] => []);
  for (let round = 1; round <= rounds; round++) {
    onProgress(`measuring: round ${round} of ${rounds}`);
    for (const [i, contestant] of contestants.entries()) {
      samples[i]!.push((await contestant.time(cycles[i]!)) / cycles[i]!);
      await otherEvents();
    }
  }
  onProgress('measuring: short bursts');
  const bursts = await bestBursts(
    contestants,
    samples.map((perCycle) => Math.min(...perCycle)),
  );
  return samples.map((perCycle, i) => timingOf(perCycle, cycles[i]! * rounds, bursts[i]!));
}

/** Nanoseconds of a burst: on a busy machine some of them go undisturbed, as no round does. */
const BURST_NS = 2e6;

/** Bursts of each contestant, behind all rounds. */
export const BURSTS = 40;

/** Nanoseconds a cycle of each contestant in the best of many short bursts, taken in turn. */
async function bestBursts(
  contestants: readonly Contestant[],
  fastest: readonly number[],
): Promise<number[]> {
  const best = [...fastest];
  for (let burst = 0; burst < BURSTS; burst++) {
    for (const [i, contestant] of contestants.entries()) {
      const cycles = Math.max(1, Math.round(BURST_NS / best[i]!));
      best[i] = Math.min(best[i]!, (await contestant.time(cycles)) / cycles);
    }
    await otherEvents();
  }
  return best;
}

/** Rounds' worth of time that warming up takes at most, even if the engine still grows faster. */
const LONGEST_WARM_UP = 20;
/** Pieces in a row that bring no more than this gain, and the optimizing tiers are through. */
const STEADY_PIECES = 6;
const GAIN = 0.97;

/** Runs a contestant until it grows no faster; returns its nanoseconds a cycle. */
async function warmUp(contestant: Contestant, roundNs: number): Promise<number> {
  const pieceNs = roundNs / 3;
  let best = Number.POSITIVE_INFINITY;
  let cycles = 1;
  let steady = 0;
  for (let spent = 0; steady < STEADY_PIECES && spent < LONGEST_WARM_UP * roundNs; ) {
    const ns = Math.max(1, await contestant.time(cycles));
    const isLong = ns > pieceNs / 4;
    const gained = ns / cycles < best * GAIN;
    best = Math.min(best, ns / cycles);
    steady = isLong && !gained ? steady + 1 : 0;
    spent += ns;
    cycles = Math.max(1, Math.min(cycles * 16, Math.round((pieceNs / ns) * cycles)));
    await otherEvents();
  }
  return best;
}

// Engines in this process keep it busy; a signal that ends it is heard only between their turns.
const otherEvents = (): Promise<void> => new Promise((resolve) => setImmediate(resolve));

function timingOf(perCycle: readonly number[], cycles: number, best: number): Timing {
  const sorted = perCycle.toSorted((p, q) => p - q);
  const middle = sorted.length >> 1;
  const median =
    sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
  return {
    nsPerCycle: fiveDigits(median),
    fastest: fiveDigits(sorted[0]!),
    slowest: fiveDigits(sorted[sorted.length - 1]!),
    best: fiveDigits(best),
    cycles,
  };
}
