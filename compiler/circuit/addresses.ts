import { type MemoryIndex, moduloPower } from './memory.js';

/** What it takes to make logic of some kind of value. */
export interface BitLogic<V> {
  readonly zero: V;
  readonly one: V;
  not(a: V): V;
  and(a: V, b: V): V;
  or(a: V, b: V): V;
  xor(a: V, b: V): V;
}

/** 1 where two addresses are the same, bit for bit. */
export function sameAddress<V>(logic: BitLogic<V>, a: readonly V[], b: readonly V[]): V {
  const alike = a.map((bit, i) => logic.not(logic.xor(bit, b[i]!)));
  return alike.reduce((all, each) => logic.and(all, each), logic.one);
}

/** 1 where there is a word at an address, see `MemoryIndex`. */
export function exists<V>(
  logic: BitLogic<V>,
  indices: readonly MemoryIndex[],
  address: readonly V[],
): V {
  let all = logic.one;
  let place = 0;
  for (const { low, size, bits } of indices) {
    const number = address.slice(place, place + bits);
    place += bits;
    if (size === 2 ** bits) continue;
    const first = moduloPower(low, bits);
    const end = first + size;
    const isFrom = logic.not(isBelow(logic, number, first));
    const isWithin =
      end <= 2 ** bits
        ? logic.and(isFrom, isBelow(logic, number, end))
        : logic.or(isFrom, isBelow(logic, number, end - 2 ** bits));
    all = logic.and(all, isWithin);
  }
  return all;
}

/** 1 where the number that bits make, the lowest first, is less than a constant. */
function isBelow<V>(logic: BitLogic<V>, bits: readonly V[], limit: number): V {
  if (limit >= 2 ** bits.length) return logic.one;
  let below = logic.zero;
  for (const [i, bit] of bits.entries()) {
    const isOne = Math.floor(limit / 2 ** i) % 2 === 1;
    below = isOne ? logic.or(logic.not(bit), below) : logic.and(logic.not(bit), below);
  }
  return below;
}
