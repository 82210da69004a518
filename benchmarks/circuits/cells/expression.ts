/** What an expression does with its operands; `mux` takes (select, value for 0, value for 1). */
export const operators = ['buf', 'not', 'and', 'nand', 'or', 'nor', 'xor', 'xnor', 'mux'] as const;

/** One of `operators`. */
export type Operator = (typeof operators)[number];

/** A function of pins: the name of a pin, `0`, `1`, or an operator with its operands. */
export type Expression = string | readonly [Operator, ...Expression[]];

/**
 * Reads the form in which the tables of cells are written: an operator before its operands, each a
 * word or such a form in parentheses, as in `nor (and a0 a1) b`. A single word stands for itself.
 */
export function expression(text: string): Expression {
  const stack: Expression[][] = [[]];
  for (const [token] of text.matchAll(/[()]|[^\s()]+/g)) {
    if (token === '(') stack.push([]);
    else if (token === ')') {
      const inner = operation(stack.pop()!);
      stack.at(-1)!.push(inner);
    } else stack.at(-1)!.push(token);
  }
  return operation(stack[0]!);
}

function operation(words: readonly Expression[]): Expression {
  const [operator, ...operands] = words;
  if (words.length === 1) return operator!;
  if (!(operators as readonly unknown[]).includes(operator)) {
    throw new RangeError(`expected an operator of ${operators.join(', ')}, got ${operator}`);
  }
  return [operator as Operator, ...operands];
}

/** The pins that an expression reads, in the order in which they first stand there. */
export function pinsRead(given: Expression): string[] {
  if (typeof given !== 'string') return [...new Set(given.slice(1).flatMap(pinsRead))];
  return given === '0' || given === '1' ? [] : [given];
}

/** The expression with some pins replaced by other expressions. */
export function substituted(
  given: Expression,
  values: Readonly<Record<string, Expression>>,
): Expression {
  if (typeof given === 'string') return values[given] ?? given;
  const [operator, ...operands] = given;
  return [operator, ...operands.map((operand) => substituted(operand, values))];
}

/**
 * The values of an expression for all combinations of its pins: bit i is the value where pin k is
 * bit k of i.
 */
export function truthTable(given: Expression, pins: readonly string[]): bigint {
  const rows = 1n << BigInt(pins.length);
  const all = (1n << rows) - 1n;
  const columns = new Map(pins.map((pin, k) => [pin, pinColumn(k, pins.length)]));
  const table = (part: Expression): bigint => {
    if (typeof part === 'string') {
      if (part === '0' || part === '1') return part === '1' ? all : 0n;
      const column = columns.get(part);
      if (column === undefined) throw new RangeError(`expected one of ${pins}, got ${part}`);
      return column;
    }
    const [operator, ...operands] = part;
    return applied(operator, operands.map(table), all);
  };
  return table(given);
}

/** The truth table of input `k` of `count` inputs. */
export function pinColumn(k: number, count: number): bigint {
  let column = 0n;
  for (let row = 0; row < 1 << count; row++) if ((row >> k) & 1) column |= 1n << BigInt(row);
  return column;
}

/** Applies an operator to truth tables; `all` has a 1 for each row. */
export function applied(operator: Operator, tables: readonly bigint[], all: bigint): bigint {
  const [first, ...others] = tables as readonly [bigint, ...bigint[]];
  switch (operator) {
    case 'buf':
      return first;
    case 'not':
      return all ^ first;
    case 'and':
      return others.reduce((value, table) => value & table, first);
    case 'nand':
      return all ^ applied('and', tables, all);
    case 'or':
      return others.reduce((value, table) => value | table, first);
    case 'nor':
      return all ^ applied('or', tables, all);
    case 'xor':
      return others.reduce((value, table) => value ^ table, first);
    case 'xnor':
      return all ^ applied('xor', tables, all);
    case 'mux':
      return ((all ^ first) & others[0]!) | (first & others[1]!);
  }
}
