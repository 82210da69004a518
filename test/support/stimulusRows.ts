import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import type { StimulusBlock } from '../../runtime/stream.js';
import { unpackRows } from './rows.js';

/** The rows of a stimulus, written as `unpackRows` does; held ones as often as they are held. */
export async function rowsOf(
  blocks: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  layout: ModelLayout,
): Promise<string[]> {
  const width = rowStride(layout.inputs, layout.threeValued);
  const texts: string[] = [];
  for await (const { cycles, rows, stride } of blocks) {
    for (let i = 0; i < cycles; i++) {
      const row = rows.slice(i * stride, i * stride + width);
      texts.push(...unpackRows(layout, layout.inputs, row));
    }
  }
  return texts;
}
