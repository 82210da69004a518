import { powerUpSeed, RandomBits } from '../random.js';
import type { Description } from './description.js';
import { shown } from './values.js';

/** How state elements start to which the netlist gives no value. */
export interface PowerUpOptions {
  /** `unknown` by default where there is x, else `zero`. */
  readonly powerUp?: 'zero' | 'one' | 'random' | 'unknown';
  /** Of random power-up, 0 unless given; the same as `clockstride run --seed`. */
  readonly seed?: number | bigint;
}

/** The state at power-up: 0, 1 or 2 for x. Throws RangeError for what the model cannot do. */
export function powerUpState(
  { initial, model }: Description,
  { powerUp, seed = 0 }: PowerUpOptions,
): Uint8Array {
  const { threeValued } = model.layout;
  const ways = ['zero', 'one', 'random', ...(threeValued ? ['unknown'] : [])];
  const way = powerUp ?? (threeValued ? 'unknown' : 'zero');
  if (!ways.includes(way)) {
    throw new RangeError(`expected powerUp ${ways.join(', ')}, got ${shown(way)}`);
  }
  // What memories hold at first is part of the module.
  if (model.layout.memories.length > 0 && way !== ways.at(threeValued ? -1 : 0)) {
    const usual = ways.at(threeValued ? -1 : 0);
    throw new RangeError(`expected powerUp ${usual} of a model with memories, got ${way}`);
  }
  const words = new Uint32Array((initial.length + 31) >>> 5);
  if (way === 'random') new RandomBits(powerUpSeed(seed)).fill(words, 0, words.length);
  const open = { zero: 0, one: 1, unknown: 2 }[way as string];
  return Uint8Array.from(initial, (value, element) =>
    value === 'x' ? (open ?? (words[element >>> 5]! >>> (element & 31)) & 1) : Number(value),
  );
}
