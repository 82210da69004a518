import type { Constant, Scope } from '../scope.js';
import type { Expression } from '../syntax.js';
import { signedValue } from './bits.js';
import { walk } from './walk.js';

/** A number that is worked out, and whether it is a real one. */
interface Numeric {
  readonly value: number;
  readonly isReal: boolean;
}

// What nests deeper is no number that someone wrote.
const MOST_LEVELS = 200;

/** The value of an integer expression; undefined after a diagnostic. */
export type Evaluate = (expression: Expression, scope: Scope) => Constant | undefined;

/**
 * A constant expression with a real number in it (clauses 4.8 and 5.1.1): operators work on real
 * numbers where one of their operands is real. The bits of the result are those of the whole number
 * that it is rounded to where it is assigned to one, half away from zero. Undefined for any other
 * expression, and for what has no value.
 */
export function realConstant(
  expression: Expression,
  scope: Scope,
  evaluate: Evaluate,
): Constant | undefined {
  if (!involvesReal(expression, scope)) return undefined;
  const result = numeric(expression, scope, evaluate, 0);
  if (result === undefined || !Number.isFinite(result.value)) return undefined;
  const { value, isReal } = result;
  const rounded = BigInt(Math.sign(value) * Math.round(Math.abs(value)));
  const width = Math.max(32, rounded.toString(2).length + 1);
  const bits = { width, signed: true, value: BigInt.asUintN(width, rounded), unknown: 0n };
  return isReal ? { ...bits, real: value } : bits;
}

function involvesReal(expression: Expression, scope: Scope): boolean {
  if (expression.kind === 'number') return false;
  let isFound = false;
  walk(expression, (node) => {
    const part = node as Expression;
    if (part.kind === 'real') isFound = true;
    else if (part.kind === 'name') isFound ||= realOf(part, scope) !== undefined;
    else if (part.kind === 'call') isFound ||= functionOf(part, scope) !== undefined;
    return !isFound;
  });
  return isFound;
}

const realOf = ({ path }: Extract<Expression, { kind: 'name' }>, scope: Scope) =>
  path.length === 1 ? scope.realOf?.(path[0]!) : undefined;

function numeric(
  expression: Expression,
  scope: Scope,
  evaluate: Evaluate,
  level: number,
): Numeric | undefined {
  if (level > MOST_LEVELS) return undefined;
  if (!involvesReal(expression, scope)) {
    const constant = evaluate(expression, scope);
    if (constant === undefined || constant.unknown !== 0n) return undefined;
    const { value, width, signed } = constant;
    return { value: Number(signed ? signedValue(value, width) : value), isReal: false };
  }
  const inner = (part: Expression) => numeric(part, scope, evaluate, level + 1);
  switch (expression.kind) {
    case 'real':
      return { value: expression.value, isReal: true };
    case 'name':
      return { value: realOf(expression, scope)!, isReal: true };
    case 'unary': {
      const operand = inner(expression.operand);
      if (operand === undefined) return undefined;
      if (expression.operator === '!') return truth(operand.value === 0);
      if (expression.operator === '+') return operand;
      return expression.operator === '-' ? { ...operand, value: -operand.value } : undefined;
    }
    case 'binary': {
      const left = inner(expression.left);
      const right = left && inner(expression.right);
      return left && right && combined(expression.operator, left.value, right.value);
    }
    case 'conditional': {
      const condition = inner(expression.condition);
      const whenTrue = condition && inner(expression.whenTrue);
      const whenFalse = whenTrue && inner(expression.whenFalse);
      if (condition === undefined || whenTrue === undefined || whenFalse === undefined) {
        return undefined;
      }
      const { value } = condition.value === 0 ? whenFalse : whenTrue;
      return { value, isReal: whenTrue.isReal || whenFalse.isReal };
    }
    case 'call': {
      const operands = expression.arguments.map(inner);
      const found = functionOf(expression, scope);
      if (found === undefined || operands.length !== found.length) return undefined;
      const values = operands.flatMap((operand) => (operand === undefined ? [] : [operand.value]));
      if (values.length < operands.length) return undefined;
      return { value: found(...values), isReal: found !== Math.trunc };
    }
    default:
      return undefined;
  }
}

const truth = (holds: boolean): Numeric => ({ value: holds ? 1 : 0, isReal: false });

/** What an operator makes of two numbers of which one is real. */
function combined(operator: string, a: number, b: number): Numeric | undefined {
  switch (operator) {
    case '+':
      return { value: a + b, isReal: true };
    case '-':
      return { value: a - b, isReal: true };
    case '*':
      return { value: a * b, isReal: true };
    case '/':
      return { value: a / b, isReal: true };
    case '**':
      return { value: a ** b, isReal: true };
    case '==':
      return truth(a === b);
    case '!=':
      return truth(a !== b);
    case '<':
      return truth(a < b);
    case '<=':
      return truth(a <= b);
    case '>':
      return truth(a > b);
    case '>=':
      return truth(a >= b);
    case '&&':
      return truth(a !== 0 && b !== 0);
    case '||':
      return truth(a !== 0 || b !== 0);
    default:
      return undefined;
  }
}

/** The functions of clauses 17.8 and 17.11.2 that designs work with. */
const functions: ReadonlyMap<string, (...values: number[]) => number> = new Map([
  ['$rtoi', Math.trunc],
  ['$itor', (value: number) => value],
  ['$ln', Math.log],
  ['$log10', Math.log10],
  ['$exp', Math.exp],
  ['$sqrt', Math.sqrt],
  ['$pow', (base: number, power: number) => base ** power],
  ['$floor', Math.floor],
  ['$ceil', Math.ceil],
]);

type Call = Extract<Expression, { kind: 'call' }>;

function functionOf({ path }: Call, scope: Scope) {
  return path.length === 1 ? functions.get(scope.shared.names.text(path[0]!)) : undefined;
}

/** Whether a call is of a function of real numbers. */
export const isRealFunction = (call: Call, scope: Scope): boolean =>
  functionOf(call, scope) !== undefined;
