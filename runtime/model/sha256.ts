// The first 32 bits of the fractional parts of the cube roots of the first 64 primes, and of the
// square roots of the first eight (FIPS 180-4, 4.2.2 and 5.3.3), computed instead of listed.
const ROUND = primes(64).map((prime) => fraction(prime, 3n));
const START = primes(8).map((prime) => fraction(prime, 2n));

/**
 * SHA-256 (FIPS 180-4) in lower-case hexadecimal.
 *
 * The platform has one too, but keeps it from pages that did not come by a secure connection.
 */
export function sha256(bytes: Uint8Array): string {
  const hash = Uint32Array.from(START);
  const words = new Uint32Array(64);
  const whole = bytes.length - (bytes.length % 64);
  for (let at = 0; at < whole; at += 64) digest(hash, words, bytes, at);
  const rest = new Uint8Array(bytes.length - whole < 56 ? 64 : 128);
  rest.set(bytes.subarray(whole));
  rest[bytes.length - whole] = 0x80;
  new DataView(rest.buffer).setBigUint64(rest.length - 8, BigInt(bytes.length) * 8n);
  for (let at = 0; at < rest.length; at += 64) digest(hash, words, rest, at);
  return Array.from(hash, (word) => word.toString(16).padStart(8, '0')).join('');
}

function digest(hash: Uint32Array, words: Uint32Array, bytes: Uint8Array, at: number): void {
  for (let i = 0, from = at; i < 16; i++, from += 4) {
    words[i] =
      (bytes[from]! << 24) | (bytes[from + 1]! << 16) | (bytes[from + 2]! << 8) | bytes[from + 3]!;
  }
  for (let i = 16; i < 64; i++) {
    const early = words[i - 15]!;
    const late = words[i - 2]!;
    const small0 = right(early, 7) ^ right(early, 18) ^ (early >>> 3);
    const small1 = right(late, 17) ^ right(late, 19) ^ (late >>> 10);
    words[i] = words[i - 16]! + small0 + words[i - 7]! + small1;
  }
  let [a, b, c, d, e, f, g, h] = hash as unknown as [
    number,
    number,
    number,
    number,
    number,
    number,
    number,
    number,
  ];
  for (let i = 0; i < 64; i++) {
    const chosen = (e & f) ^ (~e & g);
    const sum1 = right(e, 6) ^ right(e, 11) ^ right(e, 25);
    const first = (h + sum1 + chosen + ROUND[i]! + words[i]!) | 0;
    const sum0 = right(a, 2) ^ right(a, 13) ^ right(a, 22);
    const second = (sum0 + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    [h, g, f, e, d, c, b, a] = [g, f, e, (d + first) | 0, c, b, a, (first + second) | 0];
  }
  [a, b, c, d, e, f, g, h].forEach((word, i) => {
    hash[i]! += word;
  });
}

const right = (word: number, by: number): number => (word >>> by) | (word << (32 - by));

function primes(count: number): bigint[] {
  const found: bigint[] = [];
  for (let n = 2n; found.length < count; n++) if (found.every((p) => n % p !== 0n)) found.push(n);
  return found;
}

/** 32 bits behind the point of the root: the largest r with r^degree <= prime * 2^(32 degree). */
function fraction(prime: bigint, degree: bigint): number {
  const target = prime << (32n * degree);
  let root = 0n;
  for (let bit = 1n << 37n; bit > 0n; bit >>= 1n) {
    if ((root + bit) ** degree <= target) root += bit;
  }
  return Number(root & 0xffffffffn);
}
