import type { Engine, RunPoint } from '../../runtime/engine.js';
import { isSameState } from '../../runtime/samePoint.js';
import type { HeldInputs } from './heldInputs.js';

/** A point of a run and the number of cycles before it. */
export interface Mark {
  readonly cycle: number;
  readonly point: RunPoint;
  /** The state did not come again up to here. */
  readonly until: number;
}

/** Cycles of the first step; each further one is twice as long. */
const FIRST_STEP = 4096;

/**
 * The first cycle of a run from which on the states repeat with a known period.
 *
 * `marks` are points of the run, the first one where the search starts, and the last one known to
 * come again. Two runs, a period apart, go on in steps until they meet; the last step is then
 * halved. Takes about four times the cycles from the best mark to the answer, in the engine given.
 */
export async function leadIn(
  engine: Engine,
  inputs: HeldInputs,
  marks: readonly Mark[],
  period: number,
  interrupt?: AbortSignal,
): Promise<number> {
  const runs = new Pair(engine, inputs, interrupt);
  const first = lastOutside(marks, period);
  const ahead = nearest(marks, first.cycle + period);
  const second = await runs.advanced(ahead, first.cycle + period - ahead.cycle);
  let apart: readonly [Mark, Mark] = [first, second];
  if (isSameState(first.point, second.point)) return first.cycle;
  // The pair has not met yet, and has met `step` cycles later.
  let step = FIRST_STEP;
  for (; ; step *= 2) {
    const next = await runs.both(apart, step);
    if (isSameState(next[0].point, next[1].point)) break;
    apart = next;
  }
  while (step > 1) {
    const half = Math.floor(step / 2);
    const next = await runs.both(apart, half);
    if (isSameState(next[0].point, next[1].point)) step = half;
    else {
      apart = next;
      step -= half;
    }
  }
  return apart[0].cycle + 1;
}

// A state that was looked for throughout a period and did not come is none that repeats.
function lastOutside(marks: readonly Mark[], period: number): Mark {
  let last = marks[0]!;
  for (const mark of marks) if (mark.until - mark.cycle >= period) last = mark;
  return last;
}

function nearest(marks: readonly Mark[], cycle: number): Mark {
  return marks.findLast((mark) => mark.cycle <= cycle)!;
}

/** Runs one engine as if it were two. */
class Pair {
  readonly #engine: Engine;
  readonly #inputs: HeldInputs;
  readonly #interrupt: AbortSignal | undefined;

  constructor(engine: Engine, inputs: HeldInputs, interrupt: AbortSignal | undefined) {
    this.#engine = engine;
    this.#inputs = inputs;
    this.#interrupt = interrupt;
  }

  async both([a, b]: readonly [Mark, Mark], cycles: number): Promise<[Mark, Mark]> {
    return [await this.advanced(a, cycles), await this.advanced(b, cycles)];
  }

  async advanced({ cycle, point }: Mark, cycles: number): Promise<Mark> {
    this.#engine.restore(point);
    await this.#inputs.run(this.#engine, cycle, cycles, this.#interrupt);
    const after = cycle + cycles;
    return { cycle: after, point: this.#engine.save(), until: after };
  }
}
