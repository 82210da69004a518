import type binaryen from 'binaryen';
import { LANES } from './lanes.js';

/**
 * Spreads bits of the stimulus row over the lanes of a vector: bit `bits[i]` to bit 0 of lane i,
 * -1 where it does not matter.
 *
 * The bytes that hold the bits are brought to their lanes first. Where all stand at the same place
 * of their bytes, one shift is enough; else each lane is masked and compared. May read up to fifteen
 * bytes behind the row.
 */
export function emitInputLanes(
  module: binaryen.Module,
  bits: readonly number[],
  row: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const { v128, i8x16, i16x8, i32 } = module;
  const bytes = emitBytes(module, bits, row);
  const places = new Set(bits.filter((bit) => bit >= 0).map((bit) => bit % 8));
  if (places.size === 1) {
    const [place] = places as unknown as [number];
    // Bits that come from the neighbouring byte are none of those that count.
    return place === 0 ? bytes : i16x8.shr_u(bytes, i32.const(place));
  }
  const mask = () => v128.const(bits.map((bit) => (bit < 0 ? 1 : 1 << (bit % 8))));
  return i8x16.eq(v128.and(bytes, mask()), mask());
}

// The bytes of the row that hold the bits, each in its lane.
function emitBytes(
  module: binaryen.Module,
  bits: readonly number[],
  row: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const { v128, i8x16 } = module;
  const wanted = bits.map((bit) => (bit < 0 ? -1 : bit >>> 3));
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
  if (joined === undefined) throw new Error('a vector without input bits');
  return joined;
}
