import { type CompositeField, compositeFields, invert16, multiply16 } from './galois.js';
import { Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';
import { type Matrix, matrixOf, shareSums, xorNetwork } from './xorNetwork.js';

/**
 * The S-box of FIPS 197, section 5.1.1, as a module `sbox` from `x[7:0]` to `y[7:0]`. It inverts
 * in GF((2^4)^2): the inverse of a·y + b is (a·y + a + b) / (lambda·a^2 + b·(a + b)). Method:
 * V. Rijmen, "Efficient implementation of the Rijndael S-box", 2000. Of all such fields it takes
 * the one whose changes of basis need the fewest gates.
 */
export function sbox(): Module {
  const { into, outOf } = cheapestLinearLayers();
  const m = new Module('sbox');
  const x = m.inputs('x', 8);
  const linear = xorNetwork(m, into, x);
  const [b, a, sum, scaledSquare] = [0, 4, 8, 12].map((i) => linear.slice(i, i + 4));
  const product = multiplier(m, b!, sum!);
  const norm = scaledSquare!.map((bit, i) => m.xor(bit, product[i]!));
  const inverse = inverter(m, norm);
  const composite = [...multiplier(m, sum!, inverse), ...multiplier(m, a!, inverse)];
  const y = xorNetwork(m, outOf, composite);
  m.output(
    'y',
    y.map((bit, i) => ((0x63 >> i) & 1 ? m.not(bit) : bit)),
  );
  return m;
}

/** From a byte to the nibbles b, a, a + b and lambda·a^2; from the composite inverse to a byte. */
interface LinearLayers {
  readonly into: Matrix;
  readonly outOf: Matrix;
}

function cheapestLinearLayers(): LinearLayers {
  const cost = ({ into, outOf }: LinearLayers) =>
    shareSums(into, 8).steps.length + shareSums(outOf, 8).steps.length;
  return compositeFields()
    .map(linearLayers)
    .reduce((best, next) => (cost(next) < cost(best) ? next : best));
}

function linearLayers({ lambda, toComposite, fromComposite }: CompositeField): LinearLayers {
  const into = (byte: number) => {
    const a = toComposite[byte]! >> 4;
    const b = toComposite[byte]! & 15;
    return b | (a << 4) | ((a ^ b) << 8) | (multiply16(lambda, multiply16(a, a)) << 12);
  };
  const outOf = (composite: number) => affine(fromComposite[composite]!);
  return { into: matrixOf(into, 8, 16), outOf: matrixOf(outOf, 8, 8) };
}

// The affine step of the S-box without its constant 0x63.
function affine(byte: number): number {
  const twice = byte | (byte << 8);
  return (twice ^ (twice >> 4) ^ (twice >> 5) ^ (twice >> 6) ^ (twice >> 7)) & 0xff;
}

// Multiplies in GF(2^4): all products of two bits, then the sums that reduction asks for.
function multiplier(m: Module, left: Bus, right: Bus): Bus {
  const products = left.flatMap((a) => right.map((b) => m.and(a, b)));
  const sums = [0, 1, 2, 3].map((row) =>
    products.flatMap((_, i) => ((multiply16(1 << (i >> 2), 1 << (i & 3)) >> row) & 1 ? [i] : [])),
  );
  return xorNetwork(m, sums, products);
}

// Inverts in GF(2^4) by the algebraic normal form: sums of products of the four bits.
function inverter(m: Module, bits: Bus): Bus {
  const coefficients = Array.from({ length: 16 }, (_, i) => invert16(i));
  for (let bit = 1; bit < 16; bit <<= 1) {
    for (let i = 0; i < 16; i++) if (i & bit) coefficients[i]! ^= coefficients[i ^ bit]!;
  }
  const used = coefficients.flatMap((coefficient, i) => (coefficient ? [i] : []));
  const monomials = new Map<number, Bit>(bits.map((bit, i) => [1 << i, bit]));
  for (const i of used) {
    if (monomials.has(i)) continue;
    monomials.set(
      i,
      m.gate(
        'and',
        bits.filter((_, bit) => (i >> bit) & 1),
      ),
    );
  }
  const sums = [0, 1, 2, 3].map((row) =>
    used.flatMap((monomial, i) => ((coefficients[monomial]! >> row) & 1 ? [i] : [])),
  );
  return xorNetwork(
    m,
    sums,
    used.map((i) => monomials.get(i)!),
  );
}
