import type binaryen from 'binaryen';
import type { LaneModuleParts } from './writeBlock.js';

type Expression = binaryen.ExpressionRef;

/** Locals of the exported `turn`, parameters first. */
const Turn = {
  From: 0,
  RowBytes: 1,
  To: 2,
  Numbers: 3,
  Row: 4,
  Quarter: 5,
  FirstVector: 6,
} as const;

const SIDE = 32;

/**
 * Adds the exported `turn(from, rowBytes, to, numbers)` to a module of 128 lanes: from packed rows
 * of 128 cycles, `rowBytes` apart, it makes the words of a lane row, cycle c in lane c. `numbers` is
 * that of the 32-bit numbers of a row; all 32 bits of the last one get a word.
 *
 * Four squares of 32 × 32 bits stand side by side in vectors, and blocks of 16, then 8, … bits are
 * swapped in all of them at once (H. S. Warren, "Hacker's Delight", 2nd edition, section 7-3).
 */
export function addTurn({ wasm, module }: LaneModuleParts): void {
  const { i32, i32x4, v128, local } = module;
  const at = (number: number) => local.get(number, wasm.i32);
  const vector = (row: number) => local.get(Turn.FirstVector + row, wasm.v128);
  const setVector = (row: number, value: Expression) => local.set(Turn.FirstVector + row, value);
  const advance = (number: number, by: Expression) => local.set(number, i32.add(at(number), by));
  // The cycles of a square are 32 rows apart from those of the next one.
  const square = (index: number) => i32.add(at(Turn.Row), times(index));
  const times = (index: number) => i32.mul(at(Turn.Quarter), i32.const(index));
  const loads = Array.from({ length: SIDE }, (_, row) => {
    let value: Expression = v128.load32_zero(0, 4, at(Turn.Row), '0');
    for (const index of [1, 2, 3]) value = v128.load32_lane(0, 4, index, square(index), value, '0');
    return [setVector(row, value), advance(Turn.Row, at(Turn.RowBytes))];
  });
  const swaps: Expression[] = [];
  const spare = Turn.FirstVector + SIDE;
  const swapped = () => local.get(spare, wasm.v128);
  for (let half = 16, mask = 0xffff; half > 0; half >>>= 1, mask ^= mask << half) {
    for (let low = 0; low < SIDE; low = (low + half + 1) & ~half) {
      const high = low + half;
      const moved = i32x4.shr_u(vector(low), i32.const(half));
      const differing = v128.and(v128.xor(moved, vector(high)), i32x4.splat(i32.const(mask)));
      swaps.push(
        local.set(spare, differing),
        setVector(low, v128.xor(vector(low), i32x4.shl(swapped(), i32.const(half)))),
        setVector(high, v128.xor(vector(high), swapped())),
      );
    }
  }
  const stores = Array.from({ length: SIDE }, (_, bit) =>
    v128.store(16 * bit, 16, at(Turn.To), vector(bit), '0'),
  );
  const body = module.block(null, [
    local.set(Turn.Row, at(Turn.From)),
    ...loads.flat(),
    ...swaps,
    ...stores,
    advance(Turn.From, i32.const(4)),
    advance(Turn.To, i32.const(16 * SIDE)),
    advance(Turn.Numbers, i32.const(-1)),
    module.br('number', at(Turn.Numbers)),
  ]);
  const code = module.block(null, [
    local.set(Turn.Quarter, i32.shl(at(Turn.RowBytes), i32.const(5))),
    module.if(at(Turn.Numbers), module.loop('number', body)),
  ]);
  const parameters = wasm.createType(new Array<binaryen.Type>(Turn.Row).fill(wasm.i32));
  const vectors = new Array<binaryen.Type>(SIDE + 1).fill(wasm.v128);
  const locals = [wasm.i32, wasm.i32, ...vectors];
  module.addFunction('turn', parameters, wasm.none, locals, code);
  module.addFunctionExport('turn', 'turn');
}
