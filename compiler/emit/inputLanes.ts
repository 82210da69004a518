import type binaryen from 'binaryen';
import type { ConstantPool } from './constantPool.js';
import { LANES } from './lanes.js';
import { shuffled } from './shuffled.js';

/** Bit `places[i]` of byte i in bit 0 of lane i; -1 where it does not matter. */
export function pickBits(
  { v128, i8x16, i16x8, i32 }: binaryen.Module,
  bytes: binaryen.ExpressionRef,
  places: readonly number[],
): binaryen.ExpressionRef {
  const [place, another] = new Set(places.filter((each) => each >= 0));
  // One shift is enough then: bits that come from the neighbouring byte are none of those that count.
  if (another === undefined) return i16x8.shr_u(bytes, i32.const(place!));
  const mask = () => v128.const(places.map((each) => (each < 0 ? 1 : 1 << each)));
  return i8x16.eq(v128.and(bytes, mask()), mask());
}

/**
 * Bytes of the stimulus row: byte `wanted[i]` in lane i, -1 where it does not matter. May read up to
 * fifteen bytes behind the row.
 */
export function rowBytes(
  module: binaryen.Module,
  pool: ConstantPool,
  wanted: readonly number[],
  row: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const { v128 } = module;
  const window = (byte: number): binaryen.ExpressionRef => v128.load(byte, 1, row(), '0');
  const taken = new Array<boolean>(LANES).fill(false);
  let joined: binaryen.ExpressionRef | undefined;
  for (;;) {
    const open = wanted.filter((byte, lane) => byte >= 0 && !taken[lane]);
    if (open.length === 0) break;
    const start = Math.min(...open);
    const isHere = (lane: number): boolean =>
      wanted[lane]! >= start && wanted[lane]! < start + LANES && !taken[lane];
    const before = joined;
    const lanes = wanted.map((byte, lane) => {
      if (isHere(lane)) return (before === undefined ? 0 : LANES) + byte - start;
      return before === undefined || !taken[lane] ? -1 : lane;
    });
    const isInPlace = before === undefined && lanes.every((from, to) => from < 0 || from === to);
    for (let lane = 0; lane < LANES; lane++) if (isHere(lane)) taken[lane] = true;
    joined = isInPlace
      ? window(start)
      : before === undefined
        ? shuffled(module, pool, lanes, window(start))
        : shuffled(module, pool, lanes, before, window(start));
  }
  if (joined === undefined) throw new Error('a vector without bytes of the row');
  return joined;
}
