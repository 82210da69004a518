/** `count` (1 to 32) bits from bit `bit` on of the row that starts at word `at`, as an unsigned number. */
export function readBits(rows: Uint32Array, at: number, bit: number, count: number): number {
  const word = at + (bit >>> 5);
  const shift = bit & 31;
  let bits = rows[word]! >>> shift;
  if (shift + count > 32) bits |= rows[word + 1]! << (32 - shift);
  return count === 32 ? bits >>> 0 : bits & ((1 << count) - 1);
}

/** Puts the low `count` (1 to 32) bits of `bits` in place of what `readBits` would read. */
export function writeBits(
  rows: Uint32Array,
  at: number,
  bit: number,
  count: number,
  bits: number,
): void {
  const word = at + (bit >>> 5);
  const shift = bit & 31;
  const mask = count === 32 ? -1 : (1 << count) - 1;
  const masked = bits & mask;
  rows[word] = (rows[word]! & ~(mask << shift)) | (masked << shift);
  if (shift + count <= 32) return;
  rows[word + 1] = (rows[word + 1]! & ~(mask >>> (32 - shift))) | (masked >>> (32 - shift));
}

/** Whether any of `count` bits from bit `bit` on is 1. */
export function anyBit(rows: Uint32Array, at: number, bit: number, count: number): boolean {
  for (let i = 0; i < count; i += 32) {
    if (readBits(rows, at, bit + i, Math.min(32, count - i)) !== 0) return true;
  }
  return false;
}
