import { Region } from './laneStores.js';
import type { BlockPlan, Step } from './planBlock.js';
import { spillsOf } from './spills.js';

/** The scratch word that takes what is stored for the sake of order alone. */
export const ANCHOR_SLOT = 0;

/** Registers that must wait for a value for an anchor to pay. */
const WAITING = 3;

/** Steps that they must wait. */
const DISTANCE = 7;

/**
 * Keeps a block's operations where they stand, if that saves registers: an engine moves them down
 * to their first readers, so that all they read has to wait in registers instead of the one value
 * that they make.
 *
 * A store of the value, which nobody reads, holds its operation in place. It costs one short
 * instruction; two are saved for each value that needs not be put aside.
 */
export function anchored(plan: BlockPlan, registers: number): BlockPlan {
  const before = spillsOf(plan.steps, registers);
  if (before === 0) return plan;
  const steps = withAnchors(plan.steps);
  const anchors = steps.length - plan.steps.length;
  return spillsOf(steps, registers) + anchors < before ? { ...plan, steps } : plan;
}

function withAnchors(steps: readonly Step[]): Step[] {
  const reads = readsOf(steps);
  /** Registers that wait until an operation is carried out, at its latest place. */
  const waiting = new Map<number, number>();
  const result: Step[] = [];
  for (const [at, step] of steps.entries()) {
    result.push(step);
    if (step.kind === 'store') waiting.set(step.from, 1);
    if (step.kind !== 'operate') continue;
    const ending = new Set(step.operands.filter((value) => reads.get(value)!.last === at));
    const sum = [...ending].reduce((total, value) => total + (waiting.get(value) ?? 1), 0);
    waiting.set(step.to, Math.max(1, sum));
    const first = reads.get(step.to)?.first;
    if (first === undefined || sum < WAITING || first - at < DISTANCE) continue;
    // A store that follows anyway is its anchor.
    if (steps[at + 1]?.kind === 'store') continue;
    result.push({ kind: 'store', from: step.to, region: Region.Scratch, slot: ANCHOR_SLOT });
    waiting.set(step.to, 1);
  }
  return result;
}

// Per value, the first and the last step that reads it.
function readsOf(steps: readonly Step[]): Map<number, { readonly first: number; last: number }> {
  const reads = new Map<number, { readonly first: number; last: number }>();
  for (const [at, step] of steps.entries()) {
    const values =
      step.kind === 'operate' ? step.operands : step.kind === 'store' ? [step.from] : [];
    for (const value of values) {
      const known = reads.get(value);
      if (known === undefined) reads.set(value, { first: at, last: at });
      else known.last = at;
    }
  }
  return reads;
}
