import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Expression } from '../../../compiler/read/verilog/syntax.js';
import { expression, expressionOf, onlyProblem, read } from './reading.js';

describe('operators', () => {
  it.each([
    ['a | b & c', '(a|(b&c))'],
    ['a ^ b & c | d', '((a^(b&c))|d)'],
    ['a || b && c', '(a||(b&&c))'],
    ['a == b & c', '((a==b)&c)'],
    ['a < b == c >= d', '((a<b)==(c>=d))'],
    ['a << b + c', '(a<<(b+c))'],
    ['a + b * c ** d', '(a+(b*(c**d)))'],
    ['a - b - c', '((a-b)-c)'],
    ['a ** b ** c', '((a**b)**c)'],
    ['-a ** b', '((-a)**b)'],
    ['~a & !b', '((~a)&(!b))'],
    ['&a | ~&b ^ ~|c', '((&a)|((~&b)^(~|c)))'],
    ['^a ~^ ~^b', '((^a)~^(~^b))'],
    ['a ^~ b', '(a~^b)'],
    ['a & &b', '(a&(&b))'],
    ['~ ~a', '(~(~a))'],
    ['a === b !== c != d', '(((a===b)!==c)!=d)'],
    ['a >>> b <<< c >> d', '(((a>>>b)<<<c)>>d)'],
    ['a % b / c', '((a%b)/c)'],
    ['(a | b) & c', '((a|b)&c)'],
    ['a <= b', '(a<=b)'],
  ])('%s reads as %s', (text, tree) => {
    expect(expression(text)).toBe(tree);
  });

  it('a conditional nests to the right and binds weakest', () => {
    expect(expression('a || b ? c : d ? e : f | g')).toBe('((a||b)?c:(d?e:(f|g)))');
    expect(expression('a ? b ? c : d : e')).toBe('(a?(b?c:d):e)');
  });

  it('an operand spans its text', () => {
    const text = 'module m; assign y = (a & b[3]) ? {c, d} : ~e; endmodule';
    const { syntax } = read(text);
    const item = syntax.modules[0]!.items[0]!;
    if (item.kind !== 'assign' || item.value.kind !== 'conditional') throw new Error(item.kind);
    const { condition, whenTrue, whenFalse } = item.value;
    const textOf = ({ start, end }: Expression): string => text.slice(start, end);
    expect([condition, whenTrue, whenFalse].map(textOf)).toEqual(['(a & b[3])', '{c, d}', '~e']);
    expect(textOf(item.value)).toBe('(a & b[3]) ? {c, d} : ~e');
  });
});

describe('operands', () => {
  it.each([
    ['a.b.c', 'a.b.c'],
    ['a[3]', 'a[3]'],
    ['a[i + 1][j]', 'a[(i+1)][j]'],
    ['a[7:4]', 'a[7:4]'],
    ['a[i +: 4]', 'a[i+:4]'],
    ['m[2][i -: 4]', 'm[2][i-:4]'],
    ['u.g[2].v[i - 1].q[3]', 'u.g[2].v[(i-1)].q[3]'],
    ["{a, 2'b01, b[1:0]}", "{a,2'01,b[1:0]}"],
    ['{4{a}}', '{4{a}}'],
    ["{{N - 1{1'b0}}, a}", "{{(N-1){1'0}},a}"],
    ['{2{a, b}}', '{2{a,b}}'],
    ['f(a, b + 1)', 'f(a,(b+1))'],
    ['u.f(a)', 'u.f(a)'],
    ['$signed(a) >>> 1', '($signed(a)>>>1)'],
    ['$time', '$time()'],
    ['(1:2:3)', '2'],
    ['1.5e3', 'real 1500'],
    ['"ab\\n\\"\\101\\\\"', JSON.stringify('ab\n"A\\')],
    ['\\a+b  & c', '(a+b&c)'],
  ])('%s reads as %s', (text, tree) => {
    expect(expression(text)).toBe(tree);
  });

  it('an index of an element in a name stands beside the element', () => {
    const { expression, syntax } = expressionOf('g[i].a.b');
    if (expression.kind !== 'name') throw new Error(expression.kind);
    expect(expression.path.map((id) => syntax.names.text(id))).toEqual(['g', 'a', 'b']);
    expect(expression.indices?.map((index) => index?.kind)).toEqual(['name', undefined, undefined]);
  });
});

describe('long and deep expressions', () => {
  it('reads a chain of 100000 operands', () => {
    let { expression } = expressionOf(`a${' & b'.repeat(100_000)}`);
    let length = 0;
    for (; expression.kind === 'binary'; expression = expression.left) length++;
    expect(length).toBe(100_000);
  });

  it('reads a chain of 100000 conditionals', () => {
    let { expression } = expressionOf(`${'a ? b : '.repeat(100_000)}c`);
    let length = 0;
    for (; expression.kind === 'conditional'; expression = expression.whenFalse) length++;
    expect(length).toBe(100_000);
  });

  it.each([
    ['parentheses', (n: number) => `${'('.repeat(n)}a${')'.repeat(n)}`],
    [
      'operators of all levels',
      (n: number) => `${'(1||1&&1|1^1&1==1<1<<1+1*1**'.repeat(n)}a${')'.repeat(n)}`,
    ],
    ['concatenations', (n: number) => `${'{'.repeat(n)}a${'}'.repeat(n)}`],
    ['indices', (n: number) => `${'a['.repeat(n)}1${']'.repeat(n)}`],
    ['calls', (n: number) => `${'f('.repeat(n)}a${')'.repeat(n)}`],
    ['conditionals', (n: number) => `${'a ? '.repeat(n)}b${' : c'.repeat(n)}`],
    ['signs', (n: number) => `${'~'.repeat(n)}a`],
  ])('400 nested %s are read, 100000 are refused', (_what, nested) => {
    const text = (n: number): string => `module m; assign y = ${nested(n)}; endmodule`;
    expect(read(text(400)).problems).toEqual([]);
    expect(onlyProblem(text(100_000))).toMatch(/^syntax-error .* nested more than 500 levels deep/);
  });

  it('refuses a name of 100000 elements', () => {
    const problem = onlyProblem(`module m; assign y = a${'.b'.repeat(100_000)}; endmodule`);
    expect(problem).toBe("syntax-error 1:22 'a' a name has 500 elements and indices at most");
  });
});

describe('faults', () => {
  it.each([
    ['a +', "syntax-error 1:25 ';' expected an expression, found ';'"],
    ['(a', "syntax-error 1:24 ';' expected ')', found ';'"],
    ['a ? b', "syntax-error 1:27 ';' expected ':' of the conditional expression, found ';'"],
    ['{a, b', "syntax-error 1:27 ';' expected '}', found ';'"],
    ['a[1', "syntax-error 1:25 ';' expected ']', found ';'"],
    ['{}', "syntax-error 1:23 '}' expected an expression, found '}'"],
    ['a.1', "syntax-error 1:24 '1' expected a name after '.', found a number"],
    [
      'g[0][1].a',
      "syntax-error 1:22 'g[0][1]' an element of a hierarchical name has one index at most",
    ],
    ['f(a', "syntax-error 1:25 ';' expected ',' or ')', found ';'"],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`module m; assign y = ${text}; endmodule`)).toBe(problem);
  });
});

// The binary operators by how strongly they bind: IEEE 1364-2005, table 5-4.
const levels = [
  ['||'],
  ['&&'],
  ['|'],
  ['^', '~^'],
  ['&'],
  ['==', '!=', '===', '!=='],
  ['<', '<=', '>', '>='],
  ['<<', '>>', '<<<', '>>>'],
  ['+', '-'],
  ['*', '/', '%'],
  ['**'],
];

interface Tree {
  /** With no more parentheses than needed. */
  readonly text: string;
  readonly full: string;
  readonly level: number;
}

const { tree } = fc.letrec<{ tree: Tree }>((tie) => ({
  tree: fc.oneof(
    { depthSize: 'medium', withCrossShrink: true },
    fc.constantFrom('a', 'b', 'c').map((text) => ({ text, full: text, level: 12 })),
    fc
      .tuple(fc.nat(levels.length - 1), fc.nat(3), tie('tree'), tie('tree'))
      .map(([level, choice, left, right]) => {
        const operator = levels[level]![choice % levels[level]!.length]!;
        const leftText = left.level < level ? `(${left.text})` : left.text;
        const rightText = right.level <= level ? `(${right.text})` : right.text;
        const text = `${leftText} ${operator} ${rightText}`;
        return { text, full: `(${left.full}${operator}${right.full})`, level };
      }),
  ),
}));

describe('laws', () => {
  it('an expression without needless parentheses has the tree of the one with all of them', () => {
    fc.assert(
      fc.property(tree, ({ text, full }) => {
        expect(expression(text)).toBe(full);
        expect(expression(full)).toBe(full);
      }),
      { seed: 1364, numRuns: 300 },
    );
  });
});
