import type { StimulusBlock } from './stream.js';

/**
 * What is left of a stimulus after some cycles; it is read and passed over. Empty where the
 * stimulus is no longer.
 */
export async function* skipCycles(
  stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  cycles: number,
): AsyncGenerator<StimulusBlock, void, undefined> {
  let left = cycles;
  for await (const block of stimulus) {
    const passed = Math.min(left, block.cycles);
    left -= passed;
    if (passed === 0) yield block;
    else if (passed < block.cycles) {
      const rows = block.rows.subarray(passed * block.stride);
      yield { ...block, cycles: block.cycles - passed, rows };
    }
  }
}

/** The first cycles of a stimulus, or all of one that is no longer. */
export async function* takeCycles(
  stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  cycles: number,
): AsyncGenerator<StimulusBlock, void, undefined> {
  let left = cycles;
  if (left <= 0) return;
  for await (const block of stimulus) {
    const taken = Math.min(left, block.cycles);
    yield { ...block, cycles: taken };
    left -= taken;
    if (left === 0) return;
  }
}
