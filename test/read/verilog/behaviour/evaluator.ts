import { MOVING_WIDTH, type Tree } from './randomExpression.js';

/** Thrown where a value is x: by a division by zero or a select outside of the declaration. */
class UnknownValue extends Error {}

type Values = Readonly<Record<string, bigint>>;

interface Shape {
  readonly width: number;
  readonly signed: boolean;
}

const bit: Shape = { width: 1, signed: false };

/** The value as `evaluate` gives it, undefined where it is x. */
export function knownValue(tree: Tree, values: Values, targetWidth: number): bigint | undefined {
  try {
    return evaluate(tree, values, targetWidth);
  } catch (error) {
    if (error instanceof UnknownValue) return undefined;
    throw error;
  }
}

/**
 * Value of a tree by IEEE 1364-2005, clauses 5.4 and 5.5, on whole numbers: written apart from the
 * compiler to check it. Signals hold their bits as numbers from 0 to 2^width - 1.
 */
function evaluate(tree: Tree, values: Values, targetWidth: number): bigint {
  const own = shape(tree);
  const width = Math.max(own.width, targetWidth);
  return BigInt.asUintN(targetWidth, evaluateIn(tree, values, { width, signed: own.signed }));
}

/** Table 5-22: self-determined width, and 5.5.1: sign. */
export function shape(tree: Tree): Shape {
  switch (tree.op) {
    case 'signal':
      return tree.signal;
    case 'number':
      return tree;
    case 'bit':
      return bit;
    case 'part':
      return { width: tree.width, signed: false };
    case 'moving':
      return { width: MOVING_WIDTH, signed: false };
    case 'cast':
      return { width: shape(tree.operand).width, signed: tree.name === '$signed' };
    case 'unary':
      return ['+', '-', '~'].includes(tree.name) ? shape(tree.operand) : bit;
    case 'binary':
      if (/^(<<<?|>>>?)$/.test(tree.name)) return shape(tree.left);
      return /^([-+*/%&|^]|~\^)$/.test(tree.name) ? larger(tree.left, tree.right) : bit;
    case 'conditional':
      return larger(tree.parts[1], tree.parts[2]);
    case 'concat':
      return {
        width: tree.count * tree.parts.reduce((sum, part) => sum + shape(part).width, 0),
        signed: false,
      };
  }
}

function larger(a: Tree, b: Tree): Shape {
  const [x, y] = [shape(a), shape(b)];
  return { width: Math.max(x.width, y.width), signed: x.signed && y.signed };
}

// The value as a number in the context's reading: negative where the context is signed.
function evaluateIn(tree: Tree, values: Values, context: Shape): bigint {
  const fitted = (value: bigint): bigint =>
    context.signed ? BigInt.asIntN(context.width, value) : BigInt.asUintN(context.width, value);
  const own = (bits: bigint, width: number): bigint =>
    fitted(context.signed ? BigInt.asIntN(width, bits) : BigInt.asUintN(width, bits));
  const self = (node: Tree): bigint => evaluateIn(node, values, shape(node));
  switch (tree.op) {
    case 'signal':
      return own(values[tree.signal.name]!, tree.signal.width);
    case 'number':
      return own(tree.value, tree.width);
    case 'bit':
      return fitted(selected(values[tree.signal.name]!, tree.signal.width, self(tree.index), 1));
    case 'part':
      return fitted(
        selected(values[tree.signal.name]!, tree.signal.width, BigInt(tree.low), tree.width),
      );
    case 'moving': {
      const low = self(tree.base) - (tree.up ? 0n : BigInt(MOVING_WIDTH - 1));
      return fitted(selected(values[tree.signal.name]!, tree.signal.width, low, MOVING_WIDTH));
    }
    case 'cast':
      return own(self(tree.operand), shape(tree.operand).width);
    case 'unary':
      return fitted(unary(tree.name, tree.operand, values, context));
    case 'binary':
      return fitted(binary(tree.name, tree.left, tree.right, values, context));
    case 'conditional':
      return evaluateIn(
        self(tree.parts[0]) !== 0n ? tree.parts[1] : tree.parts[2],
        values,
        context,
      );
    case 'concat': {
      let joined = 0n;
      for (let i = 0; i < tree.count; i++) {
        for (const part of tree.parts) {
          const { width } = shape(part);
          joined = (joined << BigInt(width)) | BigInt.asUintN(width, self(part));
        }
      }
      return fitted(joined);
    }
  }
}

function selected(value: bigint, width: number, low: bigint, count: number): bigint {
  if (low < 0n || low + BigInt(count) > BigInt(width)) throw new UnknownValue();
  return BigInt.asUintN(count, value >> low);
}

function unary(name: string, operand: Tree, values: Values, context: Shape): bigint {
  if (name === '+') return evaluateIn(operand, values, context);
  if (name === '-') return -evaluateIn(operand, values, context);
  if (name === '~') return ~evaluateIn(operand, values, context);
  const { width } = shape(operand);
  const bits = BigInt.asUintN(width, evaluateIn(operand, values, shape(operand)));
  const ones = bits.toString(2).replaceAll('0', '').length;
  const results: Readonly<Record<string, boolean>> = {
    '!': ones === 0,
    '&': ones === width,
    '~&': ones !== width,
    '|': ones > 0,
    '~|': ones === 0,
    '^': ones % 2 === 1,
    '~^': ones % 2 === 0,
  };
  return results[name] ? 1n : 0n;
}

function binary(name: string, left: Tree, right: Tree, values: Values, context: Shape): bigint {
  if (name === '&&' || name === '||') {
    const a = evaluateIn(left, values, shape(left)) !== 0n;
    const b = evaluateIn(right, values, shape(right)) !== 0n;
    return (name === '&&' ? a && b : a || b) ? 1n : 0n;
  }
  if (/^[<>=!]=?=?$/.test(name) && !/^(<<|>>)/.test(name)) {
    const both = larger(left, right);
    return compare(name, evaluateIn(left, values, both), evaluateIn(right, values, both));
  }
  const a = evaluateIn(left, values, context);
  if (/^(<<|>>)/.test(name)) {
    const bits = BigInt.asUintN(shape(right).width, evaluateIn(right, values, shape(right)));
    const amount = bits > 5000n ? 5000n : bits; // More than any width here.
    if (name.startsWith('<<')) return a << amount;
    return name === '>>>' ? a >> amount : BigInt.asUintN(context.width, a) >> amount;
  }
  const b = evaluateIn(right, values, context);
  if ((name === '/' || name === '%') && b === 0n) throw new UnknownValue();
  switch (name) {
    case '+':
      return a + b;
    case '-':
      return a - b;
    case '*':
      return a * b;
    case '/':
      return a / b;
    case '%':
      return a % b;
    case '&':
      return a & b;
    case '|':
      return a | b;
    case '^':
      return a ^ b;
    default:
      return ~(a ^ b);
  }
}

function compare(name: string, a: bigint, b: bigint): bigint {
  const results: Readonly<Record<string, boolean>> = {
    '==': a === b,
    '===': a === b,
    '!=': a !== b,
    '!==': a !== b,
    '<': a < b,
    '<=': a <= b,
    '>': a > b,
    '>=': a >= b,
  };
  return results[name] ? 1n : 0n;
}
