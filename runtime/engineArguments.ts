import { type ModelLayout, rowStride } from './layout.js';

/**
 * Checks what `Engine.run` is called with, the same way for every engine.
 *
 * Throws RangeError for cycles that are no count, for a stride that is neither 0 nor the length of
 * a row or more, and for arrays that are too short.
 */
export function checkRun(
  layout: ModelLayout,
  cycles: number,
  stimulus: Uint32Array,
  stimulusStride: number,
  response: Uint32Array | undefined,
): void {
  if (!Number.isSafeInteger(cycles) || cycles < 0) {
    throw new RangeError(`cycles is a count, got ${cycles}`);
  }
  const inputWords = rowStride(layout.inputs, layout.threeValued);
  if (
    stimulusStride !== 0 &&
    !(Number.isSafeInteger(stimulusStride) && stimulusStride >= inputWords)
  ) {
    throw new RangeError(`stimulusStride is 0 or at least ${inputWords}, got ${stimulusStride}`);
  }
  if (cycles === 0) return;
  const stimulusWords = (cycles - 1) * stimulusStride + inputWords;
  if (stimulus.length < stimulusWords) {
    throw new RangeError(`stimulus needs ${stimulusWords} words, got ${stimulus.length}`);
  }
  const responseWords = cycles * rowStride(layout.outputs, layout.threeValued);
  if (response !== undefined && response.length < responseWords) {
    throw new RangeError(`response needs ${responseWords} words, got ${response.length}`);
  }
}

/** Checks what `Engine.reset` is called with; throws RangeError for a wrong length or value. */
export function checkState(layout: ModelLayout, state: Uint8Array): void {
  const { stateNames, threeValued } = layout;
  if (state.length !== stateNames.length) {
    throw new RangeError(`expected ${stateNames.length} state values, got ${state.length}`);
  }
  const highest = threeValued ? 2 : 1;
  const wrong = state.findIndex((value) => value > highest);
  if (wrong < 0) return;
  throw new RangeError(`${stateNames[wrong]} takes 0 to ${highest}, got ${state[wrong]}`);
}

/** Checks the row of a point to go on from; throws RangeError for a wrong length. */
export function checkBefore(layout: ModelLayout, before: Uint32Array | undefined): void {
  const words = rowStride(layout.inputs, layout.threeValued);
  if (before === undefined || before.length === words) return;
  throw new RangeError(`expected a row of ${words} words, got ${before.length}`);
}

/** A copy of the last of the rows that `Engine.run` is called with. */
export function lastRow(
  layout: ModelLayout,
  cycles: number,
  stimulus: Uint32Array,
  stimulusStride: number,
): Uint32Array {
  const start = (cycles - 1) * stimulusStride;
  return stimulus.slice(start, start + rowStride(layout.inputs, layout.threeValued));
}
