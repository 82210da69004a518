/** Bits of the generator's state, and 32-bit words of it. */
const BITS = 128;
const WORDS = 4;

/**
 * The state of xoshiro128 (see `RandomBits`) after `count` more steps, in about 20 ms at most,
 * however many they are.
 *
 * A step is linear over GF(2), so many steps are a power of its matrix, taken by squaring.
 */
export function skippedState(state: Uint32Array, count: bigint): Uint32Array {
  let current: Uint32Array = Uint32Array.from(state);
  if (count === 0n) return current;
  let power = stepMatrix();
  for (let rest = count; ; ) {
    if ((rest & 1n) === 1n) current = applied(power, current);
    rest >>= 1n;
    if (rest === 0n) return current;
    power = squared(power);
  }
}

// A matrix is its columns one behind another: what each bit of the state becomes.
function stepMatrix(): Uint32Array {
  const matrix = new Uint32Array(BITS * WORDS);
  for (let bit = 0; bit < BITS; bit++) {
    const one = new Uint32Array(WORDS);
    one[bit >>> 5] = 1 << (bit & 31);
    matrix.set(stepped(one), bit * WORDS);
  }
  return matrix;
}

function stepped([a, b, c, d]: Uint32Array): Uint32Array {
  const third = c! ^ a!;
  const last = d! ^ b!;
  const turned = (last << 11) | (last >>> 21);
  return Uint32Array.of(a! ^ last, b! ^ third, third ^ (b! << 9), turned);
}

function applied(matrix: Uint32Array, vector: Uint32Array): Uint32Array {
  const sum = new Uint32Array(WORDS);
  for (let word = 0; word < WORDS; word++) {
    for (let rest = vector[word]!; rest !== 0; rest &= rest - 1) {
      const column = (32 * word + 31 - Math.clz32(rest & -rest)) * WORDS;
      for (let i = 0; i < WORDS; i++) sum[i]! ^= matrix[column + i]!;
    }
  }
  return sum;
}

function squared(matrix: Uint32Array): Uint32Array {
  const square = new Uint32Array(BITS * WORDS);
  for (let at = 0; at < square.length; at += WORDS) {
    square.set(applied(matrix, matrix.subarray(at, at + WORDS)), at);
  }
  return square;
}
