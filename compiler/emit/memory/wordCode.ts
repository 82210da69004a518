import type binaryen from 'binaryen';
import { type MemoryPlace, moduloPower } from '../../program/memoryPlaces.js';

type Code = binaryen.ExpressionRef;

/** The number of the word that an address means, and whether there is one (absent: there always is). */
export interface WordCode {
  readonly word: Code;
  readonly isThere: Code | undefined;
}

/**
 * The word that a number in a local means, of which the bits are those of an address, the first one
 * lowest; see `MemoryIndex`. `address` gives an expression for the number each time it is called.
 */
export function wordCode(
  { i32 }: binaryen.Module,
  { shape }: MemoryPlace,
  address: () => Code,
): WordCode {
  let word: Code | undefined;
  let isThere: Code | undefined;
  let place = 0;
  const { indices } = shape;
  for (const { low, size, bits } of indices) {
    const at = place;
    place += bits;
    const element = (): Code => {
      const moved = at === 0 ? address() : i32.shr_u(address(), i32.const(at));
      const first = moduloPower(low, bits);
      const number = first === 0 ? moved : i32.sub(moved, i32.const(first));
      // Of a single index the number has no further bits, and nothing runs over.
      const isWhole = indices.length === 1 && first === 0;
      return isWhole ? number : i32.and(number, i32.const(2 ** bits - 1));
    };
    word = word === undefined ? element() : i32.add(i32.mul(word, i32.const(size)), element());
    if (size === 2 ** bits) continue;
    const within = i32.lt_u(element(), i32.const(size));
    isThere = isThere === undefined ? within : i32.and(isThere, within);
  }
  return { word: word ?? i32.const(0), isThere };
}

/** The address of a word in memory by its number. */
export function pointerCode(
  { i32 }: binaryen.Module,
  { base, step }: MemoryPlace,
  word: Code,
): Code {
  const shift = Math.log2(step);
  const offset = Number.isInteger(shift)
    ? shift === 0
      ? word
      : i32.shl(word, i32.const(shift))
    : i32.mul(word, i32.const(step));
  return i32.add(offset, i32.const(base));
}
