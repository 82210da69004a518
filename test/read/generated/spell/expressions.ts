import type { Operation, Operator, Piece, Signal } from '../design/model.js';
import { isSimple } from '../design/naming.js';
import type { Choices } from './choices.js';

/** Signs of the operators that stand between two operands. */
const binarySigns: Partial<Record<Operator, readonly string[]>> = {
  and: ['&'],
  or: ['|'],
  xor: ['^'],
  xnor: ['~^', '^~'],
  add: ['+'],
  subtract: ['-'],
  multiply: ['*'],
  shiftLeft: ['<<', '<<<'],
  shiftRight: ['>>', '>>>'],
  logicalAnd: ['&&'],
  logicalOr: ['||'],
  equal: ['=='],
  unequal: ['!='],
  same: ['==='],
  notSame: ['!=='],
  less: ['<'],
  notMore: ['<='],
  more: ['>'],
  notLess: ['>='],
};

const unarySigns: Partial<Record<Operator, readonly string[]>> = {
  not: ['~'],
  negate: ['-'],
  allOf: ['&'],
  notAllOf: ['~&'],
  anyOf: ['|'],
  noneOf: ['~|'],
  parity: ['^'],
  notParity: ['~^', '^~'],
  logicalNot: ['!'],
};

/** Operators on single bits, as the gates have them: the sign between, and one before all. */
const gateSigns: Partial<Record<Operator, readonly [before: string, between: string]>> = {
  gateAnd: ['', '&'],
  gateNand: ['~', '&'],
  gateOr: ['', '|'],
  gateNor: ['~', '|'],
  gateXor: ['', '^'],
  gateXnor: ['~', '^'],
  gateBuf: ['', '&'],
  gateNot: ['~', '&'],
};

/** Writes values of one module. */
export class ExpressionWriter {
  readonly choices: Choices;
  /** What is written in place of the name of a signal that has none. */
  readonly inlined = new Map<Signal, Operation>();

  constructor(choices: Choices) {
    this.choices = choices;
  }

  /** A name, with a backslash where it needs one or is given one. */
  id(name: string): string {
    const isPlain = isSimple(name) && !this.choices.rarely('escapes', 4);
    return isPlain ? name : `\\${name} `;
  }

  /** `[7:0]` or nothing, with a space behind. */
  range({ isVector, msb, lsb }: Pick<Signal, 'isVector' | 'msb' | 'lsb'>): string {
    return isVector ? `[${this.integer(msb)}:${this.integer(lsb)}] ` : '';
  }

  /** A whole number, such as in a range. */
  integer(value: number): string {
    const ways = [
      `${value}`,
      `${value + 1} - 1`,
      `(${value})`,
      `${value - 2}+2`,
      `2 * ${value} / 2`,
    ];
    if (value < 0)
      return this.choices.of('numbers', [`${value}`, `-(${-value})`, `1-${1 - value}`]);
    const sized = [`'d${value}`, `'h${value.toString(16)}`, `8'b${value.toString(2)}`];
    return this.choices.of('numbers', [...ways.slice(0, value > 1 ? 5 : 3), ...sized]);
  }

  /** A number of a width. */
  number(value: number, width: number): string {
    const digits = value.toString(2).padStart(width, '0');
    const grouped = digits.replace(/(?=(.{3})+$)(?!^)/g, '_');
    const hex = value.toString(16);
    return this.choices.of('numbers', [
      `${width}'b${digits}`,
      `${width}'d${value}`,
      `${width}'h${hex}`,
      `${width}'H0${hex.toUpperCase()}`,
      `${width}'o${value.toString(8)}`,
      `${width} 'b ${grouped}`,
      `${width}'B${value.toString(2)}`,
    ]);
  }

  /** A bit of a signal, counted from the right. */
  bit(signal: Signal, bit: number): string {
    if (!signal.isVector) return this.id(signal.name);
    const index = indexOf(signal, bit);
    return `${this.id(signal.name)}[${this.integer(index)}]`;
  }

  /** Bits of a signal, which has a name. */
  part(signal: Signal, low: number, width: number): string {
    const { choices } = this;
    const isWhole = width === signal.width;
    if (isWhole && (!signal.isVector || choices.pick('styles', 3) < 2)) return this.id(signal.name);
    if (width === 1 && choices.pick('styles', 4) < 3) return this.bit(signal, low);
    const bits = Array.from({ length: width }, (_, i) => low + width - 1 - i);
    if (choices.rarely('styles', 5)) {
      return `{${bits.map((bit) => this.bit(signal, bit)).join(', ')}}`;
    }
    const left = indexOf(signal, low + width - 1);
    const right = indexOf(signal, low);
    const name = this.id(signal.name);
    const least = Math.min(left, right);
    const most = Math.max(left, right);
    return choices.of('styles', [
      `${name}[${this.integer(left)}:${this.integer(right)}]`,
      `${name}[${this.integer(least)} +: ${this.integer(width)}]`,
      `${name}[${this.integer(most)} -: ${this.integer(width)}]`,
    ]);
  }

  /** A piece of a signal as an operand: nothing that is around it matters. */
  piece({ signal, low, width, zeros }: Piece): string {
    const inner = this.inlined.get(signal);
    const text =
      inner === undefined ? this.part(signal, low, width) : `(${this.expression(inner)})`;
    if (zeros === 0) return this.choices.rarely('styles', 6) ? `(${text})` : text;
    return this.choices.of('styles', [
      `{${this.number(0, zeros)}, ${text}}`,
      `{{${zeros}{1'b0}}, ${text}}`,
    ]);
  }

  /** The value of an operation; its width is that of the target, whatever it stands in. */
  expression({ operator, pieces, value, target }: Operation): string {
    return this.valueOf(
      operator,
      pieces.map((piece) => this.piece(piece)),
      value,
      target.width,
    );
  }

  /** The value of an operator on operands that are written already. */
  valueOf(operator: Operator, texts: readonly string[], value: number, width: number): string {
    const [a = '', b = '', c = ''] = texts;
    const { choices } = this;
    const between = binarySigns[operator];
    if (between !== undefined) return `${a} ${choices.of('styles', between)} ${b}`;
    const before = unarySigns[operator];
    if (before !== undefined) return `${choices.of('styles', before)} ${a}`;
    const gate = gateSigns[operator];
    if (gate !== undefined) return `${gate[0]} (${texts.join(` ${gate[1]} `)})`;
    switch (operator) {
      case 'constant':
        return this.number(value, width);
      case 'mux':
      case 'bus':
        return `${a} ? ${b} : ${c}`;
      // The divisor is made odd, and so not 0.
      case 'divide':
        return `${a} / (${b} | ${this.number(1, width)})`;
      case 'remainder':
        return `${a} % (${b} | ${this.number(1, width)})`;
      case 'square':
        return choices.of('styles', [`${a} ** 2`, `${a} * ${a}`]);
      case 'shiftSigned':
        return choices.of('styles', [
          `{$signed(${a}) >>> ${b}}`,
          `$unsigned($signed(${a}) >>> ${b})`,
        ]);
      case 'lessSigned':
        return choices.of('styles', [
          `$signed(${a}) < $signed(${b})`,
          `$signed(${b}) > $signed(${a})`,
        ]);
      case 'notLessSigned':
        return choices.of('styles', [
          `$signed(${a}) >= $signed(${b})`,
          `!($signed(${a}) < $signed(${b}))`,
        ]);
      case 'join':
        return `{${a}, ${b}}`;
      case 'repeat':
        return choices.of('styles', [
          `{${value}{${a}}}`,
          `{${new Array<string>(value).fill(a).join(', ')}}`,
        ]);
      case 'wiredAnd':
        return `${a} & ${b}`;
      case 'wiredOr':
        return `${a} | ${b}`;
      case 'pulledUp':
        return `${a} ? ${b} : ${this.number(2 ** width - 1, width)}`;
      case 'pulledDown':
        return `${a} ? ${b} : ${this.number(0, width)}`;
      case 'bitOf':
        throw new RangeError('the bit of a signal needs the signal: see `bitOf`');
      default:
        return a;
    }
  }

  /** A bit of a signal whose number is the value of a piece. */
  bitOf(signal: Signal, index: Piece): string {
    const at = this.piece(index);
    const name = this.id(signal.name);
    const { msb, lsb } = signal;
    if (lsb === 0 && lsb <= msb) return `${name}[${at}]`;
    // The number has its own width inside of braces, and the sum has thirty-two bits.
    const number = Math.min(msb, lsb) < 0 ? `$signed({1'b0, ${at}})` : `{${at}}`;
    return lsb <= msb ? `${name}[${number} + (${lsb})]` : `${name}[${lsb} - ${number}]`;
  }
}

/** The declared index of a bit that is counted from the right. */
export function indexOf({ msb, lsb }: Signal, bit: number): number {
  return lsb <= msb ? lsb + bit : lsb - bit;
}
