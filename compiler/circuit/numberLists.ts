/** Length of a page in numbers. */
const PAGE = 4096;

/** Longer lists have an array buffer of their own, or a stretch of what others have spared. */
export const SHORT = 1024;

// So many lists of each length are kept for others, so that these do not hold on to many pages.
const MOST_KEPT = 64;

let page = new ArrayBuffer(0);
/** Bytes of the page that are given away. */
let used = 0;

/** Lists that are no longer in use, by the logarithm of their length. */
const kept: Uint32Array[][] = Array.from({ length: 32 - Math.clz32(SHORT) }, () => []);

/** Stretches of long lists that are no longer in use. */
let spare: Uint32Array[] = [];

/**
 * An array for at least `least` numbers, whatever stands in it.
 *
 * A short one is a stretch of a page that many of them share: a design may have a million of them,
 * and an array buffer for each would cost far more than what it holds.
 */
export function numberList(least: number): Uint32Array {
  if (least > SHORT) return spareStretch(least) ?? new Uint32Array(least);
  const logarithm = 32 - Math.clz32(Math.max(least, 4) - 1);
  const again = kept[logarithm]!.pop();
  if (again !== undefined) return again;
  const length = 1 << logarithm;
  if (used + 4 * length > page.byteLength) {
    page = new ArrayBuffer(4 * PAGE);
    used = 0;
  }
  const list = new Uint32Array(page, used, length);
  used += 4 * length;
  return list;
}

/** Gives back what `numberList` made, or a list without room. */
export function giveBack(list: Uint32Array): void {
  if (list.length === 0 || list.length > SHORT) return;
  const lists = kept[31 - Math.clz32(list.length)]!;
  if (lists.length < MOST_KEPT) lists.push(list);
}

/**
 * Lets others use the memory of long lists, which must not be used afterwards: pages that have been
 * touched are worth keeping, since the system takes long to come up with others. What nobody needs
 * is held until `dropSpare`.
 */
export function spareList(list: Uint32Array): void {
  if (list.length > SHORT) spare.push(list);
}

/** Lets go of all spare memory. */
export function dropSpare(): void {
  spare = [];
}

function spareStretch(length: number): Uint32Array | undefined {
  const index = spare.findIndex((list) => list.length >= length);
  if (index < 0) return undefined;
  const list = spare[index]!;
  const rest = list.subarray(length);
  if (rest.length > SHORT) spare[index] = rest;
  else spare.splice(index, 1);
  return list.subarray(0, length);
}
