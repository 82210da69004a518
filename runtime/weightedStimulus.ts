import { type ModelLayout, rowStride } from './layout.js';
import { RandomBits } from './random.js';
import { writeBits } from './rowBits.js';
import { RowGatherer } from './rowGatherer.js';
import type { StimulusBlock } from './stream.js';
import type { BitRange } from './valueText.js';

/** Input bits that are 1 more or less often than half of the time. */
export interface BitWeight extends BitRange {
  /** Of a 1, from 0 to 1. */
  readonly probability: number;
}

/** How random inputs differ from fresh even bits in every cycle. */
export interface WeightedOptions {
  /** Cycles for which each row lasts; default 1. */
  readonly hold?: number;
  /** Weighted bits; none of them twice. */
  readonly weights?: readonly BitWeight[];
  /** Passes over so many cycles, in no time; `cycles` follow them. */
  readonly from?: number;
}

/**
 * A stimulus of random rows, held and weighted; like `randomStimulus` where there is nothing to hold
 * and to weight.
 *
 * Each row takes ceil(bits / 32) words of `RandomBits(seed)` as `fillRandomRows` does, and then a
 * word for each weighted bit, those in lower places of the row first: the bit is 1 where that word,
 * as an unsigned number, is less than the probability times 2^32. `cycles` may be Infinity. Throws
 * RangeError for a `hold` that is no count from 1 on, a probability outside 0 to 1, and bits that
 * are weighted twice.
 */
export function* weightedStimulus(
  layout: ModelLayout,
  seed: number | bigint,
  cycles: number,
  { hold = 1, weights = [], from = 0 }: WeightedOptions = {},
): Generator<StimulusBlock, void, undefined> {
  if (!Number.isSafeInteger(hold) || hold < 1) {
    throw new RangeError(`hold is a whole number from 1 on, got ${hold}`);
  }
  const places = weightedPlaces(weights);
  const random = new RandomBits(seed);
  const { words, bits } = layout.inputs;
  const lastWord = bits % 32 === 0 ? -1 : (1 << (bits % 32)) - 1;
  const gatherer = new RowGatherer(rowStride(layout.inputs, layout.threeValued));
  const { row } = gatherer;
  const drawn = new Uint32Array(places.length);
  random.skip(BigInt(Math.floor(from / hold)) * BigInt(words + drawn.length));
  let lasts = hold - (from % hold);
  for (let left = cycles; left > 0; ) {
    random.fill(row, 0, words);
    if (words > 0) row[words - 1]! &= lastWord;
    random.fill(drawn, 0, drawn.length);
    for (let i = 0; i < drawn.length; i++) {
      const { bit, bound } = places[i]!;
      writeBits(row, 0, bit, 1, drawn[i]! < bound ? 1 : 0);
    }
    if (gatherer.add(Math.min(lasts, left))) yield* gatherer.take();
    left -= lasts;
    lasts = hold;
  }
  yield* gatherer.take();
}

interface WeightedPlace {
  readonly bit: number;
  readonly bound: number;
}

function weightedPlaces(weights: readonly BitWeight[]): WeightedPlace[] {
  const places = weights.flatMap(({ offset, width, probability }) => {
    if (!(probability >= 0 && probability <= 1)) {
      throw new RangeError(`a probability is from 0 to 1, got ${probability}`);
    }
    const bound = probability * 0x1_0000_0000;
    return Array.from({ length: width }, (_, i) => ({ bit: offset + i, bound }));
  });
  places.sort((p, q) => p.bit - q.bit);
  const twice = places.find(({ bit }, i) => places[i + 1]?.bit === bit);
  if (twice) throw new RangeError(`input bit ${twice.bit} is weighted twice`);
  return places;
}
