import { describe, expect, it } from 'vitest';
import { Source } from '../../../compiler/diagnostics/source.js';
import { read, readAll, readWell } from './reading.js';
import { shown, tokensOf } from './tokens.js';

/** Tokens of a text joined by spaces, without their kinds. */
function words(text: string, files: Readonly<Record<string, string>> = {}): string {
  return shown(text, files)
    .map((token) =>
      token.replace(/^(name|keyword|string|based \d+) /, '').replace(/^number (\S+) .*/, '$1'),
    )
    .join(' ');
}

function problems(text: string, files: Readonly<Record<string, string>> = {}): readonly string[] {
  return tokensOf(text, files).problems;
}

describe('macros', () => {
  it.each([
    ['a text', '`define A b c\n`A d', 'b c d'],
    ['no text', '`define A\nx `A y', 'x y'],
    ['a text over several lines', '`define A b \\\n c \\\r\nd\n`A e', 'b c d e'],
    ['a text without its comments', '`define A b // c\n`A /* */ d', 'b d'],
    ['a text with a block comment', '`define A b/*x*/c\n`A', 'b c'],
    ['a string with comment signs', '`define A "b // c" d\n`A', 'b // c d'],
    ['a later definition', '`define A 1\n`A `define A 2\n`A', '1 2'],
    ['another macro, as it is at the use', '`define A `B\n`define B 1\n`A\n`define B 2\n`A', '1 2'],
    ['one in an attribute', '`define A b\n(* c = `A *) `A', 'b'],
    ['arguments', '`define F(x, y) (x + y)\n`F(a, b[1])', '( a + b [ 1 ] )'],
    ['arguments with commas in brackets', '`define F(x) x\n`F({a, (b, c)})', '{ a , ( b , c ) }'],
    ['arguments in strings and names', '`define F(x) "x" xx \\x x\n`F(a)', 'x xx x a'],
    ['an argument with an escaped name', '`define F(x) x+x\n`F(\\a+b )', 'a+b + a+b'],
    ['an argument used in another use', '`define F(x) x\n`F(`F(`F(a)))', 'a'],
    ['arguments over several lines', '`define F(x, y) y x\n`F (a,\n b)', 'b a'],
    ['an argument with a comma in a comment', '`define F(x) x\n`F(a /* , ) */)', 'a'],
    ['a text in parentheses, as the space says', '`define A (b)\n`A', '( b )'],
    ['the size or the digits of a number', "`define W 4\n`define V 9\n`W'h`V `W 'd1", '4 9 4 1'],
    [
      'directives',
      '`define A `ifdef B \\\n c \\\n `else \\\n d \\\n `endif\n`A\n`define B\n`A',
      'd c',
    ],
    ['a definition', '`define A `define B x\n`A\n`B', 'x'],
  ])('stand for %s', (_what, text, result) => {
    expect(words(text)).toBe(result);
  });

  it('end with undef', () => {
    expect(problems('`define A b\n`undef A\n`A')).toEqual([
      "name-undeclared 3:1 '`A' the macro '`A' is not defined; define it before, or with --define A=TEXT",
    ]);
  });

  it('hold in the sources that follow', () => {
    const sources = [
      new Source('a.v', '`define W 8\n`default_nettype none\n'),
      new Source('b.v', 'module m; wire [`W:0] a; endmodule'),
    ];
    const { syntax, problems } = readAll(sources);
    expect(problems).toEqual([]);
    expect(syntax.modules[0]!.defaultNetType).toBeUndefined();
  });

  it('are given from outside', () => {
    const defines = new Map([
      ['W', '8'],
      ['EMPTY', ''],
    ]);
    const { problems } = read('`ifdef EMPTY\nmodule m; wire [`W:0] a; endmodule\n`endif', {
      defines,
    });
    expect(problems).toEqual([]);
  });

  it('tokens of a use span the use', () => {
    const { tokens } = tokensOf('`define B x y\n`define F(p) p `B\n  `F(a) c');
    expect(tokens.map(({ spanned }) => spanned)).toEqual(['`F(a)', '`F(a)', '`F(a)', 'c']);
  });
});

describe('conditional text', () => {
  it.each([
    ['`ifdef A a `else b `endif c', 'b c'],
    ['`define A\n`ifdef A a `else b `endif c', 'a c'],
    ['`ifndef A a `else b `endif c', 'a c'],
    ['`define B\n`ifdef A a `elsif B b `elsif C c `else d `endif', 'b'],
    ['`define A\n`define B\n`ifdef A a `elsif B b `else d `endif', 'a'],
    ['`ifdef A a `elsif B b `endif c', 'c'],
    ['`ifdef A `ifdef B b `else c `endif d `else e `endif f', 'e f'],
    ['`define A\n`ifdef A `ifdef B b `else c `endif d `else e `endif f', 'c d f'],
    ['`ifdef A "`endif" // `endif\n /* `endif */ `undefined it\'s `else b `endif', 'b'],
    ['`ifndef A `define A x\n`endif `A', 'x'],
  ])('%s', (text, result) => {
    expect(words(text)).toBe(result);
  });
});

describe('included files', () => {
  it('stand where they are named', () => {
    expect(words('a `include "b.v" c', { 'b.v': 'b "s"' })).toBe('a b s c');
    expect(words('a `include <b.v>\nc', { 'b.v': 'b' })).toBe('a b c');
  });

  it('include others, which see their macros', () => {
    const files = { 'b.v': '`define X 1\n`include "c.v"\nb', 'c.v': 'c `X' };
    expect(words('`include "b.v"\n`X', files)).toBe('c 1 b 1');
  });

  it('have places of their own', () => {
    const { tokens } = tokensOf('`include "b.v"\na', { 'b.v': 'x\n `define Y z\n `Y' });
    expect(tokens.map(({ spanned }) => spanned)).toEqual(['x', '`Y', 'a']);
    expect(problems('`include "b.v"\na', { 'b.v': '\n `Q' })[0]).toMatch(
      /^name-undeclared b.v:2:2 /,
    );
  });

  it('begin and end modules anywhere', () => {
    const files = { 'body.v': 'wire a;\nendmodule' };
    const { syntax, sourceMap } = read('module m;\n`include "body.v"\n', { files });
    const { start, end } = syntax.modules[0]!;
    expect(sourceMap.span(start, end)).toMatchObject({ start: 0, end: 0 });
  });
});

describe('settings', () => {
  it('each module has the default net type in force at its start', () => {
    const { modules } = readWell(
      'module a; endmodule\n`default_nettype none\nmodule b; endmodule\n' +
        '`default_nettype wand\nmodule c;\n`default_nettype tri1\nendmodule\n`resetall\nmodule d; endmodule',
    );
    expect(modules.map((module) => module.defaultNetType)).toEqual([
      ...['wire', undefined, 'wand', 'wire'],
    ]);
  });

  it('cells stand between celldefine and endcelldefine', () => {
    const { modules } = readWell(
      '`celldefine\nmodule a; endmodule\n`endcelldefine\nmodule b; endmodule\n' +
        '`celldefine module c; endmodule\n`resetall\nmodule d; endmodule',
    );
    expect(modules.map((module) => module.isCell)).toEqual([true, false, true, false]);
  });

  it('unconnected inputs are pulled as said', () => {
    const { modules } = readWell(
      '`unconnected_drive pull1\nmodule a; endmodule\n`unconnected_drive pull0\nmodule b; endmodule\n' +
        '`nounconnected_drive\nmodule c; endmodule',
    );
    expect(modules.map((module) => module.unconnectedDrive)).toEqual([1, 0, undefined]);
  });

  it('begin_keywords frees the words that its version does not reserve', () => {
    const text =
      '`begin_keywords "1364-1995"\ngenerate uwire config wire\n`begin_keywords "1364-2001-noconfig"\n' +
      'generate uwire config\n`end_keywords\ngenerate\n`end_keywords\n`begin_keywords "1364-2001"\nuwire config';
    expect(shown(text)).toEqual([
      ...['name generate', 'name uwire', 'name config', 'keyword wire'],
      ...['keyword generate', 'name uwire', 'name config', 'name generate'],
      ...['name uwire', 'keyword config'],
    ]);
  });

  it('directives about timing, lines and pragmas are skipped', () => {
    expect(
      words(
        '`timescale 1ns/1ps\na `timescale 100 us\n / 10 ns\nb\n`line 3 "x.v" 1\nc\n`pragma keep "d" e\nf\n' +
          '`delay_mode_zero\n`default_decay_time infinite\ng',
      ),
    ).toBe('a b c f g');
  });

  it('directives of cell libraries that are not of the standard are passed over', () => {
    const text = '`suppress_faults\n`enable_portfaults a\n`disable_portfaults `nosuppress_faults b';
    expect(words(text)).toBe('a b');
  });
});

describe('faults', () => {
  const endless = "the text of the macro '`A' has no end; does it use itself?";
  it.each([
    [
      'x `FOO y',
      "name-undeclared 1:3 '`FOO' the macro '`FOO' is not defined; define it before, or with --define FOO=TEXT",
    ],
    [
      '`define A(x) x``_d\n`A(y)',
      "syntax-error 2:1 '`A(y)' '``' joins words in macros of SystemVerilog, but IEEE 1364-2005 " +
        'Verilog is read here; give the macro the whole word as an argument',
    ],
    ['` x', "syntax-error 1:1 '`' the name of a directive or macro is missing after '`'"],
    ['`define\nx', "syntax-error 1:1 '`define' the name of the macro is missing"],
    ['`define ifdef x', "syntax-error 1:1 '`define' 'ifdef' is the name of a directive"],
    [
      '`define F(x y) x',
      "syntax-error 1:1 '`define' the arguments of a macro are names between '(' and ')'",
    ],
    [
      '`define F() x',
      "syntax-error 1:1 '`define' the arguments of a macro are names between '(' and ')'",
    ],
    ['`undef\nx', "syntax-error 1:1 '`undef' the name of the macro is missing"],
    [
      '`define F(x) x\n`F y',
      "syntax-error 2:1 '`F' the macro '`F' needs 1 argument between '(' and ')'",
    ],
    [
      '`define F(x,y) x\n`F(y)',
      "syntax-error 2:1 '`F' the macro '`F' needs 2 arguments between '(' and ')'",
    ],
    [
      '`define F(x) x\n`F(y',
      "syntax-error 2:1 '`F' the macro '`F' needs 1 argument between '(' and ')'",
    ],
    ['`define A `A\n `A', `syntax-error 2:2 '\`A' ${endless}`],
    [
      '`define A `B `B\n`define B `A `A\n `A',
      `syntax-error 3:2 '\`A' ${endless.replace('A', 'B')}`,
    ],
    ['`ifdef A\nx', "syntax-error 1:1 '`ifdef' the conditional text has no '`endif' in its file"],
    ['`ifndef A\nx', "syntax-error 1:1 '`ifndef' the conditional text has no '`endif' in its file"],
    ['`ifdef\nx `endif', "syntax-error 1:1 '`ifdef' the name of a macro is missing"],
    ['x `else y', "syntax-error 1:3 '`else' '`else' has no '`ifdef' before it"],
    ['x `elsif A y', "syntax-error 1:3 '`elsif' '`elsif' has no '`ifdef' before it"],
    ['x `endif', "syntax-error 1:3 '`endif' '`endif' has no '`ifdef' before it"],
    ['`ifdef A `else `else `endif', "syntax-error 1:16 '`else' a second '`else' in one '`ifdef'"],
    [
      '`include "no.v"\nx',
      `file-unreadable 1:1 '\`include "no.v"' the included file "no.v" is not found; name its folder with --include`,
    ],
    [
      '`include no.v\nx',
      "syntax-error 1:1 '`include' '`include' needs a file name, such as \"cells.v\"",
    ],
    [
      '`default_nettype x',
      "syntax-error 1:1 '`default_nettype' '`default_nettype' needs a net type, such as wire, or none",
    ],
    [
      '`unconnected_drive 1',
      "syntax-error 1:1 '`unconnected_drive' '`unconnected_drive' needs pull0 or pull1",
    ],
    [
      '`timescale 2ns/1ps\nx',
      "syntax-error 1:1 '`timescale' '`timescale' needs a unit and a precision, such as 1ns / 1ps",
    ],
    [
      '`end_keywords',
      "syntax-error 1:1 '`end_keywords' '`end_keywords' has no '`begin_keywords' before it",
    ],
  ])('%j', (text, problem) => {
    expect(problems(text)).toEqual([problem]);
  });

  it('a version of the language that is not read is refused', () => {
    expect(problems('`begin_keywords "1800-2017"\nlogic')[0]).toMatch(
      /^syntax-error 1:1 '`begin_keywords' .*"1800-2017"; IEEE 1364-2005 Verilog is read/,
    );
  });

  it('a file that includes itself is stopped', () => {
    expect(problems('`include "a.v"', { 'a.v': '`include "a.v"\n' })).toEqual([
      'syntax-error a.v:1:1 \'`include "a.v"\' files are included 50 deep; does "a.v" include itself?',
    ]);
  });

  it('files that include each other without end are stopped', () => {
    const levels = Array.from({ length: 40 }, (_, i) => {
      const line = `\`include "f${i + 1}.v"\n`;
      return [`f${i}.v`, line + line];
    });
    const found = problems('`include "f0.v"', { ...Object.fromEntries(levels), 'f40.v': '' });
    expect(found).toHaveLength(1);
    expect(found[0]).toMatch(/more than 20000 files are included/);
  });

  it('text that doubles without end is stopped', () => {
    const levels = Array.from({ length: 40 }, (_, i) => `\`define M${i + 1} \`M${i} \`M${i}\n`);
    expect(problems(`\`define M0 x\n${levels.join('')} \`M40`)).toHaveLength(1);
  });

  it('what follows an undefined macro is not blamed', () => {
    const { problems } = read('module m; assign a = `NO;\nassign b = ; endmodule');
    expect(problems.map((problem) => problem.slice(0, 25))).toEqual([
      "name-undeclared 1:22 '`NO",
      "syntax-error 2:12 ';' exp",
    ]);
  });
});
