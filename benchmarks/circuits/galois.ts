/** Multiplies polynomials over GF(2), given as bit masks, modulo `modulus` of degree `degree`. */
export function multiply(x: number, y: number, modulus: number, degree: number): number {
  let product = 0;
  for (let bit = degree - 1; bit >= 0; bit--) {
    product <<= 1;
    if (product >> degree) product ^= modulus;
    if ((y >> bit) & 1) product ^= x;
  }
  return product;
}

/** Multiplies in GF(2^4) modulo x^4 + x + 1. */
export function multiply16(x: number, y: number): number {
  return multiply(x, y, 0b10011, 4);
}

/** Inverts in GF(2^4), as x^14; 0 stays 0. */
export function invert16(x: number): number {
  const x2 = multiply16(x, x);
  const x4 = multiply16(x2, x2);
  return multiply16(multiply16(x4, x4), multiply16(x4, x2));
}

/** Multiplies in the field of FIPS 197, GF(2^8) modulo x^8 + x^4 + x^3 + x + 1. */
export function multiply256(x: number, y: number): number {
  return multiply(x, y, 0b100011011, 8);
}

/**
 * GF(2^8) as GF((2^4)^2): an element a·y + b is the byte of its nibbles a and b, and
 * y^2 = y + `lambda`. The two tables lead from bytes of FIPS 197 to such bytes and back.
 */
export interface CompositeField {
  readonly lambda: number;
  readonly toComposite: readonly number[];
  readonly fromComposite: readonly number[];
}

/** All composite fields: a `lambda` that makes y^2 + y + lambda irreducible, a place for x. */
export function compositeFields(): CompositeField[] {
  const nibbles = Array.from({ length: 16 }, (_, i) => i);
  const lambdas = nibbles.filter((l) => nibbles.every((t) => (multiply16(t, t) ^ t) !== l));
  return lambdas.flatMap((lambda) => {
    const fields: CompositeField[] = [];
    for (let x = 2; x < 256; x++) {
      const toComposite = bytesAsPolynomialsIn(x, lambda);
      // An isomorphism exactly where x^8 = x^4 + x^3 + x + 1 holds for the image of x.
      if (multiplyComposite(toComposite[0x80]!, x, lambda) !== toComposite[0x1b]) continue;
      const fromComposite = new Array<number>(256);
      for (const [byte, image] of toComposite.entries()) fromComposite[image] = byte;
      fields.push({ lambda, toComposite, fromComposite });
    }
    return fields;
  });
}

function bytesAsPolynomialsIn(x: number, lambda: number): number[] {
  const images = [0];
  for (let bit = 0, power = 1; bit < 8; bit++, power = multiplyComposite(power, x, lambda)) {
    for (const image of [...images]) images.push(image ^ power);
  }
  return images;
}

function multiplyComposite(left: number, right: number, lambda: number): number {
  const [a, b, c, d] = [left >> 4, left & 15, right >> 4, right & 15];
  const ac = multiply16(a, c);
  const high = ac ^ multiply16(a, d) ^ multiply16(b, c);
  return (high << 4) | (multiply16(b, d) ^ multiply16(ac, lambda));
}
