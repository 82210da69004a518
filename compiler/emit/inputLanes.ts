import type binaryen from 'binaryen';
import { LANES } from './lanes.js';

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
  wanted: readonly number[],
  row: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const { v128, i8x16 } = module;
  const window = (byte: number): binaryen.ExpressionRef => v128.load(byte, 1, row(), '0');
  const taken = new Array<boolean>(LANES).fill(false);
  let joined: binaryen.ExpressionRef | undefined;
  for (;;) {
    const open = wanted.filter((byte, lane) => byte >= 0 && !taken[lane]);
    if (open.length === 0) break;
    const start = Math.min(...open);
    const isHere = (lane: number): boolean =>
      wanted[lane]! >= start && wanted[lane]! < start + LANES && !taken[lane];
    const lanes = wanted.map((byte, lane) =>
      isHere(lane) ? (joined === undefined ? 0 : LANES) + byte - start : lane,
    );
    const isInPlace = joined === undefined && lanes.every((from, lane) => from === lane);
    for (let lane = 0; lane < LANES; lane++) if (isHere(lane)) taken[lane] = true;
    joined = isInPlace
      ? window(start)
      : i8x16.shuffle(joined ?? window(start), window(start), lanes);
  }
  if (joined === undefined) throw new Error('a vector without bytes of the row');
  return joined;
}
