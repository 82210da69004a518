import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Expression, parseExpression } from '../../../compiler/read/liberty/expression.js';

/** An expression with all its parentheses. */
function shown(text: string): string {
  const expression = parseExpression(text);
  if (expression.kind === 'fault') {
    return `fault '${text.slice(expression.start, expression.end)}' ${expression.message}`;
  }
  return show(expression);
}

const signs = { and: ' & ', or: ' | ', xor: ' ^ ' } as const;

function show(expression: Expression): string {
  switch (expression.kind) {
    case 'name':
      return expression.name;
    case 'constant':
      return `=${expression.value}`;
    case 'not':
      return `!${show(expression.operand)}`;
    default:
      return `(${expression.operands.map(show).join(signs[expression.kind])})`;
  }
}

describe('a function', () => {
  // The order of operators is that of the Liberty format's common practice, from memory.
  it.each([
    ['A', 'A'],
    ['0', '=0'],
    [' ( 1 ) ', '=1'],
    ['A*B', '(A & B)'],
    ['A & B', '(A & B)'],
    ['A B', '(A & B)'],
    ['(A)(B)', '(A & B)'],
    ["A'B", '(!A & B)'],
    ['A !B', '(A & !B)'],
    ['A + B', '(A | B)'],
    ['A|B', '(A | B)'],
    ['A^B', '(A ^ B)'],
    ['A + B C', '(A | (B & C))'],
    ['A B + C', '((A & B) | C)'],
    ['A ^ B C', '((A ^ B) & C)'],
    ['A B ^ C', '(A & (B ^ C))'],
    ['A + B ^ C', '(A | (B ^ C))'],
    ['!A ^ B', '(!A ^ B)'],
    ["A ^ B'", '(A ^ !B)'],
    ['!(A + B)', '!(A | B)'],
    ["(A + B)'", '!(A | B)'],
    ["!A'", 'A'],
    ['!!A', 'A'],
    ["A''", 'A'],
    ["!(A')", 'A'],
    ['A & (B & C)', '(A & B & C)'],
    ['(A + B) + C', '(A | B | C)'],
    ['A & !(B & C)', '(A & !(B & C))'],
    ["A '", '!A'],
    ['A[3] & D[10]', '(A[3] & D[10])'],
    ['"A[3]" & \\"1X\\"', '(A[3] & 1X)'],
    ['\\"1\\"', '1'],
    ['u1.q_x + n$2', '(u1.q_x | n$2)'],
    ['A<3> 10', '(A<3> & 10)'],
    ['A & \\\n B \\  \r\n + C', '((A & B) | C)'],
  ])('%j reads as %s', (text, result) => {
    expect(shown(text)).toBe(result);
  });

  it.each([
    ['', "fault '' expected a pin name, 0, 1 or ("],
    ['A &', "fault '' expected a pin name, 0, 1 or ("],
    ['A + * B', "fault '*' expected a pin name, 0, 1 or (, got *"],
    ['(A', "fault '' expected an operator or ')'"],
    ['A)', "fault ')' expected an operator, got )"],
    ['A ~ B', "fault '~' expected an operator, got ~"],
    ['A == B', "fault '=' expected an operator, got ="],
    ['A , B', "fault ',' expected an operator, got ,"],
    ['!', "fault '' expected a pin name, 0, 1 or ("],
    ["'A", "fault ''' expected a pin name, 0, 1 or (, got '"],
    ['A[3', "fault '[' expected an operator, got ["],
  ])('%j is at fault', (text, result) => {
    expect(shown(text)).toBe(result);
  });

  it('may be bracketed a hundred deep and no more', () => {
    const nested = (depth: number) => `${'('.repeat(depth)}A${')'.repeat(depth)}`;
    expect(shown(nested(100))).toBe('A');
    expect(shown(nested(101))).toBe("fault '(' parentheses are more than 100 deep, got (");
    expect(shown(`${'!'.repeat(100001)}A`)).toBe('!A');
    expect(shown(nested(100000))).toMatch(/^fault/);
  });

  it('of any text is read or at fault, inside the text', () => {
    fc.assert(
      fc.property(fc.stringMatching(/^[AB01!'&*+|^()"\\[\] \n,~<>:]*$/), (text) => {
        const result = parseExpression(text);
        if (result.kind !== 'fault') return;
        expect(result.start).toBeLessThanOrEqual(result.end);
        expect(result.end).toBeLessThanOrEqual(text.length);
      }),
      { seed: 20260101, numRuns: 1000 },
    );
  });
});
