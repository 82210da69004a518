/** Something whose cycles are timed. */
export interface Timed {
  /** Nanoseconds that about `cycles` cycles take, per cycle. */
  time(cycles: number): number | Promise<number>;
}

/** How long one burst lasts: long beside a clock's resolution, short enough to go undisturbed. */
const BURST_NS = 1_000_000;

/** Rounds in which all take turns. */
const ROUNDS = 10;

/**
 * The best time of a cycle of each, in nanoseconds, out of many short bursts taken in turn: on a
 * machine that does other work as well, only the bursts that are not disturbed say anything.
 */
export async function bestOf(
  contenders: Readonly<Record<string, Timed>>,
  seconds: number,
): Promise<Record<string, number>> {
  const names = Object.keys(contenders);
  const best: Record<string, number> = {};
  // Enough calls for an optimizing tier to take over, and a pause for it to finish.
  for (const name of names) best[name] = await warm(contenders[name]!);
  for (let round = 0; round < ROUNDS; round++) {
    for (const name of names) {
      const end = performance.now() + (1000 * seconds) / ROUNDS;
      while (performance.now() < end) {
        const cycles = Math.max(1, Math.round(BURST_NS / best[name]!));
        best[name] = Math.min(best[name]!, await contenders[name]!.time(cycles));
      }
    }
  }
  return Object.fromEntries(names.map((name) => [name, Number(best[name]!.toPrecision(4))]));
}

async function warm(contender: Timed): Promise<number> {
  let best = Number.POSITIVE_INFINITY;
  for (let i = 0; i < 40; i++) {
    best = Math.min(best, await contender.time(i < 4 ? 200 : Math.ceil(BURST_NS / best)));
    await new Promise((resolve) => setTimeout(resolve, 5));
  }
  return best;
}
