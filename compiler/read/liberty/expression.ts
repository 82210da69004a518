/**
 * A Boolean function of pins and state variables. Offsets count characters of its text.
 */
export type Expression =
  | {
      readonly kind: 'name';
      readonly name: string;
      readonly start: number;
      readonly end: number;
    }
  | { readonly kind: 'constant'; readonly value: 0 | 1 }
  | { readonly kind: 'not'; readonly operand: Expression }
  | { readonly kind: Operation; readonly operands: readonly Expression[] };

export type Operation = 'and' | 'or' | 'xor';

/** Why a text is no function, and where that shows. */
export interface ExpressionFault {
  readonly kind: 'fault';
  readonly message: string;
  readonly start: number;
  readonly end: number;
}

// Deeper than any library's; keeps the stack small.
const MAX_DEPTH = 100;

/**
 * Reads a function as Liberty libraries write it: `!` before and `'` after an operand invert it;
 * then bind `^`, then `*`, `&` or nothing but space, then `+` or `|` (the order of the Liberty
 * format as common practice has it, from memory). Blanks and `\` line ends separate words.
 */
export function parseExpression(text: string): Expression | ExpressionFault {
  const parser = new ExpressionParser(text);
  try {
    return parser.parse();
  } catch (fault) {
    if (fault instanceof Fault) return fault.fault;
    throw fault;
  }
}

class Fault extends Error {
  readonly fault: ExpressionFault;

  constructor(fault: ExpressionFault) {
    super(fault.message);
    this.fault = fault;
  }
}

class ExpressionParser {
  readonly #text: string;
  // The token: an operator, a parenthesis, a name, or '' at the end.
  #token = '';
  #isName = false;
  #start = 0;
  #end = 0;
  #depth = 0;

  constructor(text: string) {
    this.#text = text;
    this.#next();
  }

  parse(): Expression {
    const expression = this.#or();
    if (this.#token !== '') this.#fail('expected an operator');
    return expression;
  }

  /** or ::= and { ( `+` | `|` ) and } */
  #or(): Expression {
    const operands = [this.#and()];
    while (this.#token === '+' || this.#token === '|') {
      this.#next();
      operands.push(this.#and());
    }
    return joined('or', operands);
  }

  /** and ::= xor { [ `*` | `&` ] xor } */
  #and(): Expression {
    const operands = [this.#xor()];
    for (;;) {
      if (this.#token === '*' || this.#token === '&') this.#next();
      else if (!this.#beginsOperand()) break;
      operands.push(this.#xor());
    }
    return joined('and', operands);
  }

  /** xor ::= operand { `^` operand } */
  #xor(): Expression {
    const operands = [this.#operand()];
    while (this.#token === '^') {
      this.#next();
      operands.push(this.#operand());
    }
    return joined('xor', operands);
  }

  /** operand ::= { `!` } ( NAME | `0` | `1` | `(` or `)` ) { `'` } */
  #operand(): Expression {
    let isInverted = false;
    for (; this.#token === '!'; this.#next()) isInverted = !isInverted;
    const operand = this.#primary();
    for (; this.#token === "'"; this.#next()) isInverted = !isInverted;
    if (!isInverted) return operand;
    return operand.kind === 'not' ? operand.operand : { kind: 'not', operand };
  }

  #primary(): Expression {
    const name = this.#token;
    const start = this.#start;
    const end = this.#end;
    const isPlain = name.length === end - start;
    if (this.#isName) {
      this.#next();
      if (isPlain && (name === '0' || name === '1'))
        return { kind: 'constant', value: name === '1' ? 1 : 0 };
      return { kind: 'name', name, start, end };
    }
    if (name !== '(') this.#fail('expected a pin name, 0, 1 or (');
    if (++this.#depth > MAX_DEPTH) this.#fail(`parentheses are more than ${MAX_DEPTH} deep`);
    this.#next();
    const inner = this.#or();
    if (this.#token !== ')') this.#fail("expected an operator or ')'");
    this.#next();
    this.#depth--;
    return inner;
  }

  #beginsOperand(): boolean {
    return this.#isName || this.#token === '(' || this.#token === '!';
  }

  #next(): void {
    const match = matchAt(blank, this.#text, this.#end);
    this.#start = this.#end + match.length;
    const quoted = matchAt(quotedName, this.#text, this.#start);
    const word = quoted === '' ? matchAt(plainName, this.#text, this.#start) : quoted;
    this.#isName = word !== '';
    const token = word || this.#text.slice(this.#start, this.#start + 1);
    this.#end = this.#start + token.length;
    this.#token = quoted === '' ? token : quoted.replaceAll(/\\?"/g, '');
  }

  #fail(expected: string): never {
    const got = this.#token === '' ? '' : `, got ${this.#token}`;
    const message = `${expected}${got}`;
    throw new Fault({ kind: 'fault', message, start: this.#start, end: this.#end });
  }
}

const blank = /(?:\s+|\\\s*\n)*/y;
const quotedName = /\\?"[^"\\]+\\?"/y;
const plainName = /(?:[^\s!'&*+|^()"\\,;:[\]{}~=/?%@#]+|\[[^\][]*\])+/y;

function matchAt(pattern: RegExp, text: string, at: number): string {
  pattern.lastIndex = at;
  return pattern.exec(text)?.[0] ?? '';
}

/** One node for operands that are joined by the same operation, however they are bracketed. */
function joined(kind: Operation, operands: readonly Expression[]): Expression {
  if (operands.length === 1) return operands[0]!;
  return {
    kind,
    operands: operands.flatMap((each) => (each.kind === kind ? each.operands : [each])),
  };
}
