import { type RowLayout, rowStride } from '../../runtime/layout.js';
import { blockCycles, type StimulusBlock } from '../../runtime/stream.js';

/** Words that the rows of a stimulus may take which comes again: 64 MB. */
const MOST_WORDS = 1 << 24;

/**
 * All rows of a stimulus, packed, one for each cycle. Throws RangeError where they are more than
 * fit 64 MB, or none.
 */
export async function allRows(
  stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>,
  row: RowLayout,
  threeValued: boolean,
): Promise<Uint32Array> {
  const words = rowStride(row, threeValued);
  let rows = new Uint32Array(1024 * words);
  let end = 0;
  let cycles = 0;
  for await (const block of stimulus) {
    cycles += block.cycles;
    if (cycles * Math.max(1, words) > MOST_WORDS) {
      throw new RangeError('the stimulus is too long to come again: its rows take more than 64 MB');
    }
    if (cycles * words > rows.length) {
      const larger = new Uint32Array(Math.max(2 * rows.length, cycles * words));
      larger.set(rows);
      rows = larger;
    }
    for (let i = 0; i < block.cycles; i++, end += words) {
      const at = i * block.stride;
      rows.set(block.rows.subarray(at, at + words), end);
    }
  }
  if (cycles === 0) throw new RangeError('the stimulus has no row that could come again');
  return rows.slice(0, end);
}

/**
 * A stimulus of rows that come again and again, from a cycle on: row c of them, modulo their
 * number, is that of cycle c. The block of cycle 0 has no other.
 */
export function* repeatedRows(
  rows: Uint32Array,
  stride: number,
  from = 0,
): Generator<StimulusBlock, void, undefined> {
  const period = stride === 0 ? 1 : rows.length / stride;
  const times = Math.max(1, Math.floor(blockCycles(stride) / period));
  const all = new Uint32Array(rows.length * times);
  for (let i = 0; i < times; i++) all.set(rows, i * rows.length);
  let place = from % period;
  if (from === 0) {
    yield { cycles: 1, rows, stride };
    place = 1 % period;
  }
  for (;;) {
    yield { cycles: period * times - place, rows: all.subarray(place * stride), stride };
    place = 0;
  }
}
