import fc from 'fast-check';

/** A signal of the random expressions' module. */
export interface Operand {
  readonly name: string;
  readonly width: number;
  readonly signed: boolean;
}

/** Inputs of several widths and both signs. */
export const operands: readonly Operand[] = [
  { name: 'a', width: 4, signed: false },
  { name: 'b', width: 5, signed: true },
  { name: 'c', width: 1, signed: false },
  { name: 'd', width: 8, signed: true },
  { name: 'e', width: 11, signed: false },
];

/** An expression, built so that its value can be worked out without the compiler. */
export type Tree =
  | { readonly op: 'signal'; readonly signal: Operand }
  | {
      readonly op: 'number';
      readonly width: number;
      readonly signed: boolean;
      readonly value: bigint;
    }
  | { readonly op: 'bit'; readonly signal: Operand; readonly index: Tree }
  | { readonly op: 'part'; readonly signal: Operand; readonly low: number; readonly width: number }
  | { readonly op: 'moving'; readonly signal: Operand; readonly base: Tree; readonly up: boolean }
  | { readonly op: 'unary' | 'cast'; readonly name: string; readonly operand: Tree }
  | { readonly op: 'binary'; readonly name: string; readonly left: Tree; readonly right: Tree }
  | { readonly op: 'conditional'; readonly parts: readonly [Tree, Tree, Tree] }
  | { readonly op: 'concat'; readonly count: number; readonly parts: readonly Tree[] };

const signal = fc.constantFrom(...operands);
const wide = fc.constantFrom(...operands.filter(({ width }) => width > 1));

const leaf: fc.Arbitrary<Tree> = fc.oneof(
  { weight: 4, arbitrary: signal.map((s): Tree => ({ op: 'signal', signal: s })) },
  {
    weight: 2,
    arbitrary: fc
      .record({ width: fc.integer({ min: 1, max: 9 }), signed: fc.boolean(), bits: fc.nat(511) })
      .map(({ width, signed, bits }): Tree => {
        return { op: 'number', width, signed, value: BigInt.asUintN(width, BigInt(bits)) };
      }),
  },
  {
    weight: 1,
    arbitrary: fc
      .record({ signal: wide, low: fc.nat(3), width: fc.integer({ min: 1, max: 3 }) })
      .map(({ signal: s, low, width }): Tree => {
        const from = Math.min(low, s.width - width);
        return { op: 'part', signal: s, low: from, width };
      }),
  },
);

// Mostly within the declarations, so that few values are x as a whole.
const twoBits = fc
  .record({ signal: wide, low: fc.nat(2) })
  .map((parts): Tree => ({ op: 'part', width: 2, ...parts }));
const oneBit = fc
  .record({ signal: wide, low: fc.nat(2) })
  .map((parts): Tree => ({ op: 'part', width: 1, ...parts }));
const upperBase = oneBit.map((low): Tree => {
  const one: Tree = { op: 'number', width: 1, signed: false, value: 1n };
  return { op: 'concat', count: 1, parts: [one, low] };
});

const unaries = ['+', '-', '~', '!', '&', '|', '^', '~&', '~|', '~^'];
const binaries = [
  ...['+', '-', '*', '/', '%', '&', '|', '^', '~^'],
  ...['<<', '>>', '<<<', '>>>'],
  ...['==', '!=', '===', '!==', '<', '<=', '>', '>=', '&&', '||'],
];

/** Random expressions over `operands`. */
export const tree: fc.Arbitrary<Tree> = fc.letrec<{ tree: Tree }>((tie) => ({
  tree: fc.oneof(
    { maxDepth: 4, depthSize: 'small' },
    leaf,
    fc
      .record({ name: fc.constantFrom(...unaries), operand: tie('tree') })
      .map((parts): Tree => ({ op: 'unary', ...parts })),
    fc
      .record({ name: fc.constantFrom(...binaries), left: tie('tree'), right: tie('tree') })
      .map((parts): Tree => ({ op: 'binary', ...parts })),
    fc
      .record({ name: fc.constantFrom(...binaries), left: tie('tree'), right: tie('tree') })
      .map((parts): Tree => ({ op: 'binary', ...parts })),
    fc
      .tuple(tie('tree'), tie('tree'), tie('tree'))
      .map((parts): Tree => ({ op: 'conditional', parts })),
    fc
      .record({
        count: fc.integer({ min: 1, max: 2 }),
        parts: fc.array(tie('tree'), { minLength: 1, maxLength: 2 }),
      })
      .map((parts): Tree => ({ op: 'concat', ...parts })),
    fc
      .record({ name: fc.constantFrom('$signed', '$unsigned'), operand: tie('tree') })
      .map((parts): Tree => ({ op: 'cast', ...parts })),
    fc
      .record({ signal: wide, index: fc.oneof(twoBits, twoBits, twoBits, tie('tree')) })
      .map((parts): Tree => ({ op: 'bit', ...parts })),
    fc
      .record({ signal: wide, base: fc.oneof(oneBit, oneBit, tie('tree')) })
      .map((parts): Tree => ({ op: 'moving', up: true, ...parts })),
    fc
      .record({ signal: wide, base: fc.oneof(upperBase, upperBase, tie('tree')) })
      .map((parts): Tree => ({ op: 'moving', up: false, ...parts })),
  ),
})).tree;

/** Width of every indexed part select of the random expressions. */
export const MOVING_WIDTH = 3;

/** The expression as Verilog. */
export function textOf(node: Tree): string {
  switch (node.op) {
    case 'signal':
      return node.signal.name;
    case 'number':
      return `${node.width}'${node.signed ? 's' : ''}h${node.value.toString(16)}`;
    case 'bit':
      return `${node.signal.name}[${textOf(node.index)}]`;
    case 'part':
      return `${node.signal.name}[${node.low + node.width - 1}:${node.low}]`;
    case 'moving':
      return `${node.signal.name}[${textOf(node.base)} ${node.up ? '+' : '-'}: ${MOVING_WIDTH}]`;
    case 'unary':
      return `(${node.name} (${textOf(node.operand)}))`;
    case 'cast':
      return `${node.name}(${textOf(node.operand)})`;
    case 'binary':
      return `(${textOf(node.left)} ${node.name} ${textOf(node.right)})`;
    case 'conditional': {
      const [condition, one, zero] = node.parts;
      return `(${textOf(condition)} ? ${textOf(one)} : ${textOf(zero)})`;
    }
    case 'concat': {
      const inner = `{${node.parts.map(textOf).join(', ')}}`;
      return node.count === 1 ? inner : `{${node.count}${inner}}`;
    }
  }
}
