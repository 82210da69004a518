import { describe, expect, it } from 'vitest';
import { constantOf, constantText } from './bench.js';

// Worked by hand from IEEE 1364-2005, clause 5; the clause of each rule is in the title.
const facts: Readonly<Record<string, readonly (readonly [string, string])[]>> = {
  'numbers have the width and sign they are written with (3.5.1)': [
    ['5', `32'sb${'101'.padStart(32, '0')}`],
    ["4'd9", "4'b1001"],
    ["4'sd9", "4'sb1001"],
    ["'h1f", `32'b${'11111'.padStart(32, '0')}`],
    ["12'hx3", "12'bxxxxxxxx0011"],
    ["12'h0z3", "12'b0000xxxx0011"],
    ["8'bx", "8'bxxxxxxxx"],
    ["40'bx", `40'b${'x'.repeat(40)}`],
    ['"AB"', "16'b0100000101000010"],
    ['4294967296', `34'sb01${'0'.repeat(32)}`],
  ],
  'an unsized number with x at its left end fills its context (3.5.1)': [
    ["36'd0 | 'bx", `36'b${'x'.repeat(36)}`],
    ["36'd0 | 'b1", `36'b${'1'.padStart(36, '0')}`],
  ],
  'arithmetic is modular in the width of the larger operand (5.1.5, 5.4.1)': [
    ["4'd9 + 4'd8", "4'b0001"],
    ["4'd9 + 5'd8", "5'b10001"],
    ["4'd3 - 4'd5", "4'b1110"],
    ["4'd7 * 4'd5", "4'b0011"],
    ["-4'd3", "4'b1101"],
    ["+4'd3", "4'b0011"],
    ["4'd13 / 4'd4", "4'b0011"],
    ["4'd13 % 4'd4", "4'b0001"],
  ],
  'signed division truncates toward zero; a remainder has the sign of the first operand (5.1.5)': [
    ["-8'sd7 / 8'sd2", "8'sb11111101"],
    ["-8'sd7 % 8'sd2", "8'sb11111111"],
    ["8'sd7 % -8'sd2", "8'sb00000001"],
    // -12 as an unsigned 32-bit number, divided by 3; the example of clause 5.1.3.
    ["-'d12 / 3", `32'b${(1431655761).toString(2).padStart(32, '0')}`],
    ["-'sd12 / 3", `32'sb${'1'.repeat(29)}100`],
  ],
  'division by zero and operands with x give x (5.1.5)': [
    ["4'd7 / 4'd0", "4'bxxxx"],
    ["4'd7 % 4'd0", "4'bxxxx"],
    ["4'd7 + 4'b1x00", "4'bxxxx"],
  ],
  'powers follow table 5-6; the exponent keeps its own width and sign (5.1.5)': [
    ["8'd3 ** 2'd3", "8'b00011011"],
    ["8'd2 ** 4'd9", "8'b00000000"],
    ["8'sd2 ** -1", "8'sb00000000"],
    ["-8'sd1 ** -3", "8'sb11111111"],
    ["-8'sd1 ** -4", "8'sb00000001"],
    ["8'sd0 ** -1", "8'sbxxxxxxxx"],
    ["8'd0 ** 0", "8'b00000001"],
  ],
  'relations compare as signed only if both operands are (5.1.7, 5.1.8)': [
    ['-1 < 0', "1'b1"],
    ["-4'sd1 < 4'd0", "1'b0"],
    ["4'sb1000 < 8'sd0", "1'b1"],
    ["4'sb1000 < 8'd16", "1'b1"],
    ["4'd3 >= 4'd3", "1'b1"],
    ["4'd3 > 4'd3", "1'b0"],
    ["4'd3 <= 4'b0x11", "1'bx"],
    ["4'd3 == 4'b0x11", "1'bx"],
    ["4'd4 == 4'b0x11", "1'b0"],
    ["4'b0x11 === 4'b0x11", "1'b1"],
    ["4'b0x11 !== 4'b0011", "1'b1"],
  ],
  'logical operators take truth values (5.1.9)': [
    ["4'd2 && 4'd1", "1'b1"],
    ["!4'd2", "1'b0"],
    ["4'd0 || 1'bx", "1'bx"],
    ["4'd0 && 1'bx", "1'b0"],
    ["!4'b0x00", "1'bx"],
    ["!4'b0x10", "1'b0"],
  ],
  'bitwise operators work on extended operands (5.1.10)': [
    ["4'b1100 & 6'b111010", "6'b001000"],
    ["4'b1100 ~^ 4'b1010", "4'b1001"],
    ["~4'b1x00", "4'b0x11"],
    ["4'b1x0x & 4'b00x1", "4'b000x"],
    ["4'sb1000 | 6'sb000001", "6'sb111001"],
    ["4'sb1000 | 6'b000001", "6'b001001"],
  ],
  'reductions give one bit (5.1.11)': [
    ["&4'b1111", "1'b1"],
    ["~&4'b1111", "1'b0"],
    ["|4'b0x00", "1'bx"],
    ["~|4'b0000", "1'b1"],
    ["^4'b1011", "1'b1"],
    ["~^4'b1011", "1'b0"],
    ["^4'b101x", "1'bx"],
  ],
  'shifts keep the width and sign of their left operand (5.1.12)': [
    ["4'b1001 << 1", "4'b0010"],
    ["4'b1001 >> 1", "4'b0100"],
    ["4'sb1001 >>> 1", "4'sb1100"],
    ["4'b1001 >>> 1", "4'b0100"],
    ["4'sb1001 >> 1", "4'sb0100"],
    ["4'sb1001 <<< 2", "4'sb0100"],
    ["4'b1001 << 4'd12", "4'b0000"],
    ["4'b1001 >> -1", "4'b0000"],
    ["4'b1001 << 1'bx", "4'bxxxx"],
    // The sign of the context decides, not that of the operand (5.5.2).
    ["(4'sb1001 >>> 1) + 4'd0", "4'b0100"],
    ["(4'sb1001 >>> 1) + 8'sd0", "8'sb11111100"],
  ],
  'the conditional operator merges where its condition is x (5.1.13)': [
    ["1'b1 ? 4'd3 : 6'd5", "6'b000011"],
    ["1'bx ? 4'b1100 : 4'b1010", "4'b1xx0"],
    ["1'b0 ? 4'd3 : 4'sd5", "4'b0101"],
  ],
  'concatenations are unsigned and as wide as their parts (5.1.14)': [
    ["{2'b10, 3'sb101}", "5'b10101"],
    ["{2{2'b10}}", "4'b1010"],
    ["{{0{1'b1}}, 2'b01}", "2'b01"],
    ["{3{1'b1, 1'b0}}", "6'b101010"],
  ],
  'expressions are worked out in the width of their context (5.4.1, 5.5.2)': [
    ["(4'd15 + 4'd15) >> 1", "4'b0111"],
    ["(4'd15 + 4'd15 + 5'd0) >> 1", "5'b01111"],
    ["{4'd15 + 4'd15}", "4'b1110"],
    ["(4'd15 + 4'd15) == 5'd30", "1'b1"],
    ["(4'd15 + 4'd15) == 4'd14", "1'b1"],
    ["1'b1 ? 4'd15 + 4'd15 : 8'd0", "8'b00011110"],
  ],
  'sign casts change the sign alone (5.5)': [
    ["$signed(4'b1100) + 6'sd0", "6'sb111100"],
    ["$unsigned(4'sb1100) + 6'd0", "6'b001100"],
    ['$unsigned(-4)', `32'b${'1'.repeat(30)}00`],
  ],
  'the logarithm counts address bits (17.11.1)': [
    ['$clog2(0)', `32'sb${'0'.repeat(32)}`],
    ['$clog2(1)', `32'sb${'0'.repeat(32)}`],
    ['$clog2(16)', `32'sb${'100'.padStart(32, '0')}`],
    ['$clog2(17)', `32'sb${'101'.padStart(32, '0')}`],
  ],
};

describe('constant expressions', () => {
  for (const [title, rows] of Object.entries(facts)) {
    it(title, () => {
      for (const [text, value] of rows)
        expect(`${text} = ${constantText(text)}`).toBe(`${text} = ${value}`);
    });
  }

  it('call constant functions, with loops and recursion (10.4.5)', () => {
    const functions = `
      function integer log; input integer n; integer i; begin
        log = 0;
        for (i = n - 1; i > 0; i = i >> 1) log = log + 1;
      end endfunction
      function automatic [31:0] factorial; input [31:0] n;
        factorial = n <= 1 ? 1 : n * factorial(n - 1);
      endfunction
      function [7:0] swap(input [7:0] v); begin : body
        integer i;
        for (i = 0; i < 8; i = i + 1) swap[i] = v[7 - i];
      end endfunction
      function integer less(input [7:0] v); less = v - 9; endfunction
      function signed [7:0] narrow(input signed [3:0] v); narrow = v; endfunction`;
    const value = (text: string): unknown => constantOf(text, functions).constant?.value;
    expect(value('log(1000)')).toBe(10n);
    expect(value('factorial(10)')).toBe(3628800n);
    expect(value("swap(8'b11010000)")).toBe(0b00001011n);
    expect(constantText("less(8'd8) + 40'sd0", functions)).toBe(`40'sb${'1'.repeat(40)}`);
    expect(constantText('narrow(8)', functions)).toBe("8'sb11111000");
  });

  it('select bits and parts of parameters', () => {
    const parameters = "parameter A = 8'b11001010;";
    expect(constantText('A[1]', parameters)).toBe("1'b1");
    expect(constantText('A[5:2]', parameters)).toBe("4'b0010");
    expect(constantText('A[2 +: 3]', parameters)).toBe("3'b010");
    expect(constantText('A[9:6]', parameters)).toBe("4'bxx11");
  });

  it('round a real number that stands alone to a whole one (4.8.2)', () => {
    expect(constantOf('1.5').constant?.value).toBe(2n);
    expect(constantOf('-2.5').constant?.value).toBe(0xfffffffdn);
  });

  it.each([
    ['1.5 + 1', 2.5],
    ['1 / 2 * 5.0', 0],
    ['1.0 / 2 * 5', 2.5],
    ['-(2 ** 0.5) ** 2 + 1', 3],
    ["4'sb1111 * 1.5", -1.5],
    ['1 > 2 ? 3 : 4.5', 4.5],
    ['1.5 ? 3 : 4.5', 3],
    ['$itor(7) / 2', 3.5],
    ['$ceil($ln(1000) / $ln(2))', 10],
    ['$pow(2, 3) + $sqrt(2.25) + $floor(-0.5)', 8.5],
  ])('work %s out in real numbers', (text, value) => {
    expect(constantOf(text).constant?.real).toBeCloseTo(value, 12);
  });

  it.each([
    ['$rtoi(50.0e6 / 115200 + 0.5)', 434n],
    ['$rtoi(-1.9)', 0xffffffffn],
    ['1.5 > 1 && 0.1', 1n],
    ['!0.5', 0n],
    ['0.5 == 1 / 2', 0n],
  ])('make a whole number of real ones by %s', (text, value) => {
    const { constant } = constantOf(text);
    expect([constant?.value, constant?.real]).toEqual([value, undefined]);
  });

  const refusals: readonly (readonly [text: string, code: string, at: string, items: string])[] = [
    ['a + 1', 'constant-required', 'a', 'wire [3:0] a;'],
    ['none', 'name-undeclared', 'none', ''],
    ["{2{1'b1, 1}}", 'range-invalid', '1', ''],
    ["{-1{1'b1}}", 'range-invalid', '-1', ''],
    ["{1'bx{1'b1}}", 'range-invalid', "1'bx", ''],
    ["{70000{1'b1}}", 'range-invalid', "{70000{1'b1}}", ''],
    ['$random', 'not-supported', '$random', ''],
    ['$clog2(1, 2)', 'argument-count', '$clog2(1, 2)', ''],
    ['1.5 % 1', 'not-supported', '1.5', ''],
    ['f(1, 2)', 'argument-count', 'f(1, 2)', 'function f(input a); f = a; endfunction'],
    ['f(1)', 'loop-unbounded', 'f(a)', 'function f(input a); f = f(a); endfunction'],
    ['f', 'range-invalid', 'f', 'function f(input a); f = a; endfunction'],
    ['m', 'range-invalid', 'm', 'reg m [1:0];'],
    ['f(1)', 'name-undeclared', 'f(1)', 'task f(input a); ; endtask'],
    [
      'f(1)',
      'constant-required',
      'v',
      'reg v; function f(input a); begin v = a; f = a; end endfunction',
    ],
  ];
  it.each(refusals)('refuse %s with %s at the place', (text, code, at, items) => {
    const { constant, diagnostics } = constantOf(text, items);
    expect(constant).toBeUndefined();
    const found = diagnostics.map(({ code: c, span }) => [
      c,
      span!.source.slice(span!.start, span!.end),
    ]);
    expect(found).toEqual([[code, at]]);
  });
});
