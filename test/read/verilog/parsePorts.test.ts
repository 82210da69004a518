import { describe, expect, it } from 'vitest';
import { onlyProblem, readWell, showItems } from './reading.js';
import { showExpression } from './show.js';

/** The ports of a module as `name=expression`, and its items. */
function header(text: string): { ports: string[]; items: string[] } {
  const syntax = readWell(`${text} endmodule`);
  const module = syntax.modules[0]!;
  const ports = module.ports.map(({ name, expression }) => {
    const inner = expression === undefined ? '' : showExpression(expression, syntax.names);
    return `${syntax.names.text(name)}=${inner}`;
  });
  return { ports, items: showItems(module, syntax) };
}

describe('ports named in the header', () => {
  it.each([
    ['module m;', []],
    ['module m ();', []],
    ['macromodule m (a, b);', ['a=a', 'b=b']],
    ['module m (.x(a), .y({b, c[3:0]}), .z());', ['x=a', 'y={b,c[3:0]}', 'z=']],
    ['module m (a[3:0], {b, c}, d[1]);', ['=a[3:0]', '={b,c}', '=d[1]']],
    ['module m (a, , b);', ['a=a', '=', 'b=b']],
    ['module m ((* x *) a);', ['a=a']],
  ])('%s', (text, ports) => {
    expect(header(text)).toEqual({ ports, items: [] });
  });
});

describe('ports declared in the header', () => {
  it.each([
    ['module m (input a, b, output y);', ['a=a', 'b=b', 'y=y'], ['input a,b;', 'output y;']],
    [
      'module m (input wire signed [3:0] a, inout tri b, output reg [1:0] q = 2, r);',
      ['a=a', 'b=b', 'q=q', 'r=r'],
      ['input wire signed [3:0] a;', 'inout tri b;', 'output reg [1:0] q=2,r;'],
    ],
    ['module m (output integer i);', ['i=i'], ['output integer signed i;']],
  ])('%s', (text, ports, items) => {
    expect(header(text)).toEqual({ ports, items });
  });

  it('parameters come before them', () => {
    const { items } = header(
      'module m #(parameter W = 8, D = W * 2, parameter integer X = 1, parameter [1:0] Y = 0) (input [W-1:0] a);',
    );
    expect(items).toEqual([
      'parameter W=8,D=(W*2);',
      'parameter integer signed X=1;',
      'parameter [1:0] Y=0;',
      'input [(W-1):0] a;',
    ]);
  });
});

describe('faults', () => {
  it.each([
    ['module (a);', "1:8 '(' expected the name of the module, found '('"],
    ['module m (a;', "1:12 ';' expected ',' or ')' after the port, found ';'"],
    ['module m (a, 1);', "1:14 '1' expected a port, found a number"],
    ['module m (.1(a));', "1:12 '1' expected the name of a port after '.', found a number"],
    ['module m (input a b);', "1:19 'b' expected ',' or ')' after the port, found 'b'"],
    ['module m (input a, 3);', "1:20 '3' expected the name of a port, found a number"],
    ['module m (input);', "1:16 ')' expected the name of a port, found ')'"],
    [
      'module m (a)',
      "1:14 'endmodule' expected ';' after the header of the module, found 'endmodule'",
    ],
    ['module m #(W = 8) ();', "1:12 'W' expected 'parameter', found 'W'"],
    [
      'module m #(parameter W) ();',
      "1:23 ')' expected '=' and the value of the parameter, found ')'",
    ],
    [
      'module m #(parameter W = 8 D = 3) ();',
      "1:28 'D' expected ',' or ')' after the value of the parameter, found 'D'",
    ],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`${text} endmodule`)).toBe(`syntax-error ${problem}`);
  });
});
