import type { Position } from '../../diagnostics/sourceMap.js';
import { Char } from './characters.js';
import { decode } from './decode.js';
import {
  basedBits,
  decimalBits,
  fitToWidth,
  MAX_WIDTH,
  type NumberBits,
  SIGNED_BASE,
} from './numbers.js';
import type { Parser } from './parser.js';
import type { Expression, NumberExpression } from './syntax.js';
import { Token } from './tokens.js';

/** number ::= decimal | [ size ] `'` [ `s` ] base digits | real (clause 3.5) */
export function parseNumber(p: Parser): Expression {
  const { tokens } = p;
  const { kind, start, end, value } = tokens;
  if (kind === Token.Based) return parseBased(p, undefined, start);
  const text = tokenText(p);
  tokens.next();
  if (kind === Token.Real) {
    return { kind: 'real', value: Number(text.replaceAll('_', '')), start, end };
  }
  if (value >= 0) return parseNumberFrom(p, value, start, end);
  if (p.is(Token.Based)) checkWidth(p, MAX_WIDTH + 1, start, end);
  if (text.length > MAX_WIDTH / 4) p.failAt('the number has too many digits', start, end);
  return numberOf(undefined, true, decimalBits(text), start, end);
}

/** Goes on after an unsigned number below 2^31, which may be the size of one with a base. */
export function parseNumberFrom(
  p: Parser,
  value: number,
  start: Position,
  end: Position,
): NumberExpression {
  if (!p.is(Token.Based)) return plainNumber(value, start, end);
  checkWidth(p, value, start, end);
  return parseBased(p, value, start);
}

/** A number as it stands, without size and base. */
export function plainNumber(value: number, start: Position, end: Position): NumberExpression {
  const bits = { value: BigInt(value), unknown: 0n, highZ: 0n, extends: 'zero' } as const;
  return numberOf(undefined, true, bits, start, end);
}

function parseBased(p: Parser, width: number | undefined, start: Position): NumberExpression {
  const { tokens } = p;
  const { end, value } = tokens;
  const signed = value >= SIGNED_BASE;
  const isOneDigit = tokens.textEnd - tokens.textStart === 1;
  if (width === 1 && isOneDigit && !signed) {
    // The constants 0 and 1 of netlists, tied to many a pin.
    const bits = oneBit[tokens.text[tokens.textStart]! - Char.Zero];
    if (bits !== undefined) {
      tokens.next();
      return numberOf(width, signed, bits, start, end);
    }
  }
  const digits = tokenText(p);
  if (digits.length > MAX_WIDTH) p.failAt('the number has too many digits', start, end);
  const bits = basedBits(signed ? value - SIGNED_BASE : value, digits);
  tokens.next();
  if (typeof bits === 'string') p.failAt(`${bits}, in a number such as 4'b01xz`, start, end);
  if (width === undefined) return numberOf(width, signed, bits, start, end);
  const fitted = fitToWidth(bits, width);
  if (fitted.value !== bits.value) {
    const message = `the number needs more than the ${width} bits of its width; the upper ones are cut`;
    p.problems.add('width-mismatch', message, start, end);
  }
  return numberOf(width, signed, fitted, start, end);
}

const oneBit: readonly NumberBits[] = [decimalBits('0'), decimalBits('1')];

function numberOf(
  width: number | undefined,
  signed: boolean,
  bits: NumberBits,
  start: Position,
  end: Position,
): NumberExpression {
  const { value, unknown, highZ, extends: fill } = bits;
  return { kind: 'number', width, signed, value, unknown, highZ, extends: fill, start, end };
}

function checkWidth(p: Parser, width: number, start: Position, end: Position): void {
  if (width === 0) p.failAt('the width of a number is 1 at least', start, end);
  if (width > MAX_WIDTH) p.failAt(`a number has ${MAX_WIDTH} bits at most`, start, end);
}

function tokenText(p: Parser): string {
  const { text, textStart, textEnd } = p.tokens;
  return decode(text, textStart, textEnd);
}
