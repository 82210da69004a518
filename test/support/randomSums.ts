import fc from 'fast-check';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import type { NetId } from '../../compiler/circuit/ids.js';

/** How the carry of a full adder is built. */
const styles = ['half adders', 'majority', 'multiplexer', 'nands'] as const;

/** One sum of two words, or of a word and a constant. */
interface SumRecipe {
  readonly style: (typeof styles)[number];
  readonly width: number;
  /** Words before it, counted backwards. */
  readonly from: readonly [number, number];
  /** The bits of the second operand: of a word, inverted, turned over by a bit, or a constant. */
  readonly second: 'word' | 'inverted' | 'governed' | 'constant' | 'none';
  readonly constant: number;
  readonly carryIn: 'none' | 'one' | 'bit';
  /** Column in which the carry is another bit than that of the column below, if there is one. */
  readonly brokenAt: number;
  /** Column whose carry is seen from outside. */
  readonly tap: number;
  readonly register: 'none' | 'plain' | 'accumulated';
  /** Only the carry of the last column is used. */
  readonly isComparison: boolean;
}

const recipe: fc.Arbitrary<SumRecipe> = fc.record({
  style: fc.constantFrom(...styles),
  width: fc.oneof(fc.integer({ min: 1, max: 34 }), fc.integer({ min: 1, max: 70 })),
  from: fc.tuple(fc.nat(5), fc.nat(5)),
  second: fc.constantFrom(
    ...(['word', 'word', 'inverted', 'governed', 'constant', 'none'] as const),
  ),
  constant: fc.nat(),
  carryIn: fc.constantFrom('none', 'one', 'bit'),
  brokenAt: fc.oneof(fc.constant(1000), fc.constant(1000), fc.nat(40)),
  tap: fc.oneof(fc.constant(1000), fc.nat(80)),
  register: fc.constantFrom('none', 'plain', 'accumulated'),
  isComparison: fc.constantFrom(false, false, false, true),
});

/** Circuits of ripple adders, counters and comparators, whole and broken, one behind another. */
export function randomSums(): fc.Arbitrary<Circuit> {
  const widths = fc.array(fc.integer({ min: 1, max: 70 }), { minLength: 1, maxLength: 3 });
  return fc
    .tuple(widths, fc.array(recipe, { minLength: 1, maxLength: 4 }))
    .map(([inputs, recipes]) => {
      const circuit = circuitOf(inputs, recipes);
      const print = { value: () => JSON.stringify([inputs, recipes]), enumerable: false };
      return Object.defineProperty(circuit, fc.toStringMethod, print);
    });
}

function circuitOf(inputWidths: readonly number[], recipes: readonly SumRecipe[]): Circuit {
  const builder = new CircuitBuilder();
  const clock = builder.net();
  builder.input('clk', [clock]);
  const wordOf = (width: number): NetId[] => Array.from({ length: width }, () => builder.net());
  const words = inputWidths.map((width, i) => {
    const word = wordOf(width);
    builder.input(`in${i}`, word, { msb: width - 1, lsb: 0 });
    return word;
  });
  const shown: NetId[] = [];
  for (const each of recipes) {
    const [p, q] = each.from.map((back) => words[words.length - 1 - (back % words.length)]!);
    const kept = wordOf(each.width);
    const first = each.register === 'accumulated' ? kept : p!;
    const { sum, carries } = summed(builder, each, first, q!);
    for (const [i, output] of kept.entries()) {
      if (each.register === 'none') builder.drive(output, GateKind.Buf, [sum[i]!]);
      else builder.register({ output, clock, data: sum[i]! });
    }
    if (each.isComparison && each.register !== 'accumulated') {
      words.push([carries.at(-1)!, ...p!]);
    } else {
      words.push(kept);
      shown.push(...kept);
    }
    const tapped = carries[each.tap] ?? carries.at(-1)!;
    if (each.tap < 1000) shown.push(tapped, builder.gate(GateKind.And, p!));
  }
  const last = words.at(-1)!;
  const outputs = [...shown, ...last];
  builder.output('out', outputs, { msb: outputs.length - 1, lsb: 0 });
  const names = [clock, ...words.flat()];
  const signals = names.map((_, offset) => ({
    name: `n${offset}`,
    ...{ msb: 0, lsb: 0, isVector: false, offset, width: 1 },
  }));
  const module = builder.hierarchy.addModule({ name: 'sums', signals, bits: signals.length });
  builder.hierarchy.addScope('sums', 0, module, names);
  return builder.finish('sums');
}

// The carries are those that go out of each column.
function summed(
  builder: CircuitBuilder,
  { style, width, second, constant, carryIn, brokenAt }: SumRecipe,
  p: readonly NetId[],
  q: readonly NetId[],
): { sum: NetId[]; carries: NetId[] } {
  const sum: NetId[] = [];
  const carries: NetId[] = [];
  const gate = (kind: GateKind, ...inputs: NetId[]): NetId => builder.gate(kind, inputs);
  const constantNet = (value: number): NetId => gate(value === 1 ? GateKind.One : GateKind.Zero);
  const governor = q[0]!;
  let carry =
    carryIn === 'none' ? constantNet(0) : carryIn === 'one' ? constantNet(1) : q[q.length - 1]!;
  for (let i = 0; i < width; i++) {
    const a = p[i % p.length]!;
    const other = q[i % q.length]!;
    const b =
      second === 'word'
        ? other
        : second === 'inverted'
          ? gate(GateKind.Not, other)
          : second === 'governed'
            ? gate(GateKind.Xor, other, governor)
            : constantNet(second === 'constant' ? (constant >>> (i % 31)) & 1 : 0);
    const c = i === brokenAt ? gate(GateKind.And, carry, governor) : carry;
    const half = gate(GateKind.Xor, a, b);
    sum.push(gate(GateKind.Xor, half, c));
    carry = carryBy(gate, style, { a, b, c, half });
    carries.push(carry);
  }
  return { sum, carries };
}

function carryBy(
  gate: (kind: GateKind, ...inputs: NetId[]) => NetId,
  style: SumRecipe['style'],
  { a, b, c, half }: { a: NetId; b: NetId; c: NetId; half: NetId },
): NetId {
  switch (style) {
    case 'half adders':
      return gate(GateKind.Or, gate(GateKind.And, a, b), gate(GateKind.And, half, c));
    case 'majority':
      return gate(
        GateKind.Or,
        gate(GateKind.And, a, b),
        gate(GateKind.And, c, gate(GateKind.Or, a, b)),
      );
    case 'multiplexer':
      return gate(GateKind.Mux, half, a, c);
    default:
      return gate(
        GateKind.Nand,
        gate(GateKind.Nand, a, b),
        gate(GateKind.Nand, a, c),
        gate(GateKind.Nand, b, c),
      );
  }
}
