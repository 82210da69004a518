import type { BenchEngine, BenchResult } from '../../compiler/report/benchResult.js';

/** A ratio may fall by so much before it counts as fallen. */
export const TOLERANCE = 0.15;

/** What is watched: how many times as fast as engine `over` engine `of` is. */
const watched: readonly { readonly of: BenchEngine; readonly over: BenchEngine }[] = [
  { of: 'wasm', over: 'native' },
  { of: 'wasm', over: 'nativeMarch' },
  { of: 'wasm', over: 'bytecode' },
  { of: 'table', over: 'native' },
];

/** A ratio that is lower than it was. */
export interface Fallen {
  readonly circuit: string;
  readonly of: BenchEngine;
  readonly over: BenchEngine;
  readonly recorded: number;
  /** Undefined where an engine is not there any more. */
  readonly now: number | undefined;
}

/**
 * The ratios of a circuit that have fallen by more than the tolerance, or that cannot be had any
 * more. Each is of the best bursts, which what else the machine does disturbs least.
 */
export function fallen(recorded: BenchResult, now: BenchResult): Fallen[] {
  return watched.flatMap(({ of, over }) => {
    const was = ratio(recorded, of, over);
    const is = ratio(now, of, over);
    if (was === undefined || (is !== undefined && is >= was * (1 - TOLERANCE))) return [];
    return [{ circuit: recorded.circuit, of, over, recorded: was, now: is }];
  });
}

function ratio({ engines }: BenchResult, of: BenchEngine, over: BenchEngine): number | undefined {
  const [fast, slow] = [engines[of], engines[over]];
  return fast && slow && slow.best / fast.best;
}

/** One line on a ratio. */
export function fallenText({ circuit, of, over, recorded, now }: Fallen): string {
  const is = now === undefined ? 'not to be had' : now.toFixed(2);
  return `${circuit}: ${of} over ${over} is ${is}, was ${recorded.toFixed(2)}`;
}
