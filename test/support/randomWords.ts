import fc from 'fast-check';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import type { NetId } from '../../compiler/circuit/ids.js';

/** One step of a datapath: a word made from words that stand before it. */
interface WordRecipe {
  readonly kind: 'and' | 'or' | 'xor' | 'choose' | 'add' | 'turn' | 'shuffle' | 'invert' | 'fold';
  /** Words before it, counted backwards. */
  readonly from: readonly [number, number, number];
  /** How far to turn, what to shuffle by, which bits to invert. */
  readonly seed: number;
  /** `hold`: kept where a bit of another word is 0. */
  readonly register: 'none' | 'plain' | 'hold';
  readonly isOutput: boolean;
}

const INPUTS = 45;

const recipe: fc.Arbitrary<WordRecipe> = fc.record({
  kind: fc.constantFrom(
    'and',
    'or',
    'xor',
    'choose',
    'add',
    'turn',
    'shuffle',
    'invert',
    'fold',
  ) as fc.Arbitrary<WordRecipe['kind']>,
  from: fc.tuple(fc.nat(5), fc.nat(5), fc.nat(5)),
  seed: fc.nat(0xffff),
  register: fc.constantFrom('none', 'none', 'plain', 'hold') as fc.Arbitrary<
    WordRecipe['register']
  >,
  isOutput: fc.boolean(),
});

/**
 * Circuits of words of bits: the same operation on each bit, bits that change places, single bits
 * that govern whole words, single bits made of words, and an output that has bit 0 of several words,
 * then bit 1 of them, and so on.
 */
export function randomWords(): fc.Arbitrary<Circuit> {
  const widths = fc.array(fc.integer({ min: 1, max: 40 }), { minLength: 1, maxLength: 3 });
  // Words in the output across them, and bits before it; -1 without.
  const across = fc.tuple(fc.constantFrom(-1, 8, 8, 9), fc.nat(2));
  return fc.tuple(widths, fc.array(recipe, { minLength: 2, maxLength: 12 }), across).map((made) => {
    const circuit = circuitOf(...made);
    const print = { value: () => JSON.stringify(made), enumerable: false };
    return Object.defineProperty(circuit, fc.toStringMethod, print);
  });
}

function circuitOf(
  inputWidths: readonly number[],
  recipes: readonly WordRecipe[],
  [wordsAcross, before]: readonly [number, number],
): Circuit {
  const builder = new CircuitBuilder();
  const clock = builder.net();
  builder.input('clk', [clock]);
  const names: NetId[] = [clock];
  const wordOf = (width: number): NetId[] => Array.from({ length: width }, () => builder.net());
  const words = inputWidths.map((width, i) => {
    const word = wordOf(Math.min(width, INPUTS));
    builder.input(`in${i}`, word, { msb: word.length - 1, lsb: 0 });
    names.push(...word);
    return word;
  });
  for (const [index, step] of recipes.entries()) {
    const [p, q, r] = step.from.map((back) => words[words.length - 1 - (back % words.length)]!);
    const made = wordBy(builder, step, p!, q!, r!);
    const kept = step.register === 'none' ? made : wordOf(made.length);
    if (step.register !== 'none') {
      for (const [i, output] of kept.entries()) {
        const data =
          step.register === 'hold'
            ? builder.gate(GateKind.Mux, [r![step.seed % r!.length]!, output, made[i]!])
            : made[i]!;
        builder.register({ output, clock, data });
      }
    }
    words.push(kept);
    names.push(...kept);
    if (step.isOutput) builder.output(`out${index}`, kept, { msb: kept.length - 1, lsb: 0 });
  }
  const last = words.at(-1)!;
  builder.output('last', last, { msb: last.length - 1, lsb: 0 });
  if (wordsAcross > 0) {
    const chosen = words.slice(-wordsAcross);
    const places = Math.min(...chosen.map((word) => word.length));
    const bits = [
      ...last.slice(0, before),
      ...Array.from({ length: places }, (_, i) => chosen.map((word) => word[i]!)).flat(),
    ];
    builder.output('across', bits, { msb: bits.length - 1, lsb: 0 });
  }
  const signals = names.map((_, offset) => ({
    name: `n${offset}`,
    ...{ msb: 0, lsb: 0, isVector: false, offset, width: 1 },
  }));
  const module = builder.hierarchy.addModule({ name: 'words', signals, bits: signals.length });
  builder.hierarchy.addScope('words', 0, module, names);
  return builder.finish('words');
}

function wordBy(
  builder: CircuitBuilder,
  { kind, seed }: WordRecipe,
  p: readonly NetId[],
  q: readonly NetId[],
  r: readonly NetId[],
): NetId[] {
  const both = p.slice(0, Math.max(1, Math.min(p.length, q.length)));
  const gate = (kinds: GateKind): NetId[] =>
    both.map((bit, i) => builder.gate(kinds, [bit, q[i]!]));
  switch (kind) {
    case 'and':
      return gate(seed % 2 === 0 ? GateKind.And : GateKind.Nand);
    case 'or':
      return gate(seed % 2 === 0 ? GateKind.Or : GateKind.Nor);
    case 'xor':
      return gate(seed % 2 === 0 ? GateKind.Xor : GateKind.Xnor);
    case 'choose':
      return both.map((bit, i) => builder.gate(GateKind.Mux, [r[seed % r.length]!, bit, q[i]!]));
    case 'add':
      return added(builder, both, q);
    case 'turn':
      return p.map((_, i) => p[(i + seed) % p.length]!);
    case 'shuffle':
      return p.map((_, i) => p[(i * (1 + 2 * (seed % 7)) + seed) % p.length]!);
    case 'invert':
      return p.map((bit, i) => ((seed >>> (i % 16)) & 1 ? builder.gate(GateKind.Not, [bit]) : bit));
    case 'fold':
      return [p, q, r].map((word) => builder.gate(GateKind.Xor, [...word, p[0]!]));
  }
}

// A ripple-carry adder: each bit depends on the one before.
function added(builder: CircuitBuilder, p: readonly NetId[], q: readonly NetId[]): NetId[] {
  let carry: NetId | undefined;
  return p.map((a, i) => {
    const b = q[i]!;
    const half = builder.gate(GateKind.Xor, [a, b]);
    const both = builder.gate(GateKind.And, [a, b]);
    const before = carry;
    if (before === undefined) {
      carry = both;
      return half;
    }
    carry = builder.gate(GateKind.Or, [both, builder.gate(GateKind.And, [half, before])]);
    return builder.gate(GateKind.Xor, [half, before]);
  });
}
