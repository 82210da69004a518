import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { expressionOf, onlyProblem } from './reading.js';
import { showNumber } from './show.js';

function number(text: string): string {
  const { expression } = expressionOf(text);
  if (expression.kind !== 'number') throw new Error(expression.kind);
  return showNumber(expression);
}

describe('values', () => {
  // The examples are of the forms that IEEE 1364-2005, clause 3.5.1, describes.
  it.each([
    ['659', '659'],
    ["'h837FF", "'10000011011111111111"],
    ["'o7460", "'111100110000"],
    ["4'b1001", "4'1001"],
    ["5 'D 3", "5'00011"],
    ["3'b01x", "3'01x"],
    ["12'hx", "12'xxxxxxxxxxxx"],
    ["8'hz3", "8'zzzz0011"],
    ["16'hz", "16'zzzzzzzzzzzzzzzz"],
    ["4'shf", "4's1111"],
    ["16'sd?", "16'szzzzzzzzzzzzzzzz"],
    ["4'd x", "4'xxxx"],
    ["6'o1?", "6'001zzz"],
    ["8'b0x", "8'0000000x"],
    ["8'bx0", "8'xxxxxxx0"],
    ['27_195_000', '27195000'],
    ["16'b0011_0101_0001_1111", "16'0011010100011111"],
    ["32'h12ab_F001", "32'00010010101010111111000000000001"],
    ["'hx", "'x…xxxx"],
    ["'bz1", "'z…z1"],
    ["'dz", "'z…z"],
    ["4'b?0z1", "4'z0z1"],
    ['98765432109876543210', '98765432109876543210'],
    ["3'hX5", "3'101"],
  ])('%s is %s', (text, value) => {
    expect(number(text)).toBe(value);
  });

  it('a plain decimal is signed, one with a base is signed after s only', () => {
    const signs = ['7', "'d7", "'sd7", "3'd7", "3'Sb111"].map((text) => {
      const { expression } = expressionOf(text);
      return expression.kind === 'number' && expression.signed;
    });
    expect(signs).toEqual([true, false, true, false, true]);
  });

  it('any value in any base comes back', () => {
    fc.assert(
      fc.property(
        fc.bigInt({ min: 0n, max: 1n << 200n }),
        fc.constantFrom(
          ['b', 2] as const,
          ['o', 8] as const,
          ['d', 10] as const,
          ['h', 16] as const,
        ),
        (value, [letter, base]) => {
          const { expression } = expressionOf(`201'${letter}${value.toString(base)}`);
          expect(expression).toMatchObject({ kind: 'number', width: 201, value, unknown: 0n });
        },
      ),
      { seed: 1364 },
    );
  });
});

describe('faults', () => {
  it.each([
    ["0'b0", "syntax-error 1:22 '0' the width of a number is 1 at least"],
    ["2000000'b0", "syntax-error 1:22 '2000000' a number has 1048576 bits at most"],
    ["4294967296'b0", "syntax-error 1:22 '4294967296' a number has 1048576 bits at most"],
    ["4'b012", "syntax-error 1:22 '4'b012' '2' is no digit of base 2, in a number such as 4'b01xz"],
    ["4'o8", "syntax-error 1:22 '4'o8' '8' is no digit of base 8, in a number such as 4'b01xz"],
    ["4'd1x", "syntax-error 1:22 '4'd1x' 'x' is no digit of base 10, in a number such as 4'b01xz"],
    ["8'hfg", "syntax-error 1:22 '8'hfg' 'g' is no digit of base 16, in a number such as 4'b01xz"],
    [
      "4'b",
      "syntax-error 1:22 '4'b' digits are missing after the base, in a number such as 4'b01xz",
    ],
    [
      "2'b101",
      "width-mismatch 1:22 '2'b101' the number needs more than the 2 bits of its width; the upper ones are cut",
    ],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`module m; assign y = ${text}; endmodule`)).toBe(problem);
  });

  it('a number of two million digits is refused', () => {
    const problem = onlyProblem(`module m; assign y = ${'9'.repeat(2_000_000)}; endmodule`);
    expect(problem).toMatch(/the number has too many digits$/);
    const based = onlyProblem(`module m; assign y = 'h${'9'.repeat(2_000_000)}; endmodule`);
    expect(based).toMatch(/the number has too many digits$/);
  });
});
