import { describe, expect, it } from 'vitest';
import { items, onlyProblem, readWell } from './reading.js';

describe('declarations', () => {
  it.each([
    ['wire a;', ['wire a;']],
    ['wire [3:0] a, b;', ['wire [3:0] a,b;']],
    ['wire signed [W-1:0] a = b + 1;', ['wire signed [(W-1):0] a=(b+1);']],
    ['wire a = b, c;', ['wire a=b,c;']],
    ['wire vectored [1:0] a; tri scalared [0:1] b;', ['wire [1:0] a;', 'tri [0:1] b;']],
    ['wire #3 a; wire [1:0] #(1, 2:3:4) b;', ['wire a;', 'wire [1:0] b;']],
    ['wire #3 a; wire b;', ['wire a,b;']],
    ['wire (strong0, pull1) #2 a = b;', ['wire (strong0,pull1) a=b;']],
    ['trireg (small) #(0, 0, 50) c; trireg (large) [3:0] d;', ['trireg c;', 'trireg [3:0] d;']],
    [
      'tri a; wand b; wor c; triand d; trior e; tri0 f; tri1 g; supply0 h; supply1 i; uwire j;',
      [
        'tri a;',
        'wand b;',
        'wor c;',
        'triand d;',
        'trior e;',
        'tri0 f;',
        'tri1 g;',
        'supply0 h;',
        'supply1 i;',
        'uwire j;',
      ],
    ],
    ['wire a [0:3]; wire [7:0] m [0:3][1:0], n;', ['wire a[0:3];', 'wire [7:0] m[0:3][1:0],n;']],
    ["reg q; reg [7:0] r = 8'h1, s;", ['reg q;', "reg [7:0] r=8'00000001,s;"]],
    ['reg signed [7:0] m [0:15];', ['reg signed [7:0] m[0:15];']],
    [
      'integer i, j = 3; time t; real x = 1.5; realtime y; event e; genvar g, h;',
      [
        'integer signed i,j=3;',
        'time t;',
        'real x=real 1.5;',
        'realtime y;',
        'event e;',
        'genvar g,h;',
      ],
    ],
    [
      'input a, b; output [3:0] c; inout signed d; input wire e; output reg [1:0] f = 2;',
      [
        'input a,b;',
        'output [3:0] c;',
        'inout signed d;',
        'input wire e;',
        'output reg [1:0] f=2;',
      ],
    ],
    [
      'output integer i; output time t; input tri1 x;',
      ['output integer signed i;', 'output time t;', 'input tri1 x;'],
    ],
  ])('%s', (body, shown) => {
    expect(items(body)).toEqual(shown);
  });

  it('plain wires that follow each other share an item, others do not', () => {
    expect(
      items('wire a; wire b, c = d;\nwire [1:0] e; wire f; reg g; wire h; wire i [1:0];'),
    ).toEqual([...['wire a,b,c=d;', 'wire [1:0] e;', 'wire f;', 'reg g;', 'wire h,i[1:0];']]);
  });

  it('a name and its declaration have places', () => {
    const text = 'module m; wire a, bc = d; wire e; endmodule';
    const item = readWell(text).modules[0]!.items[0]!;
    if (item.kind !== 'declaration') throw new Error(item.kind);
    const spanned = [...item.names].map(({ start, end }) => text.slice(start, end));
    expect(spanned).toEqual(['a', 'bc = d', 'e']);
    expect(item.names.length).toBe(3);
    expect(text.slice(item.start, item.end)).toBe('wire a, bc = d; wire e;');
  });
});

describe('parameters', () => {
  it.each([
    ['parameter A = 1, B = A + 1;', ['parameter A=1,B=(A+1);']],
    [
      'parameter [3:0] A = 1; parameter signed B = -1;',
      ['parameter [3:0] A=1;', 'parameter signed B=(-1);'],
    ],
    [
      'parameter integer A = 1; parameter real B = 2.5; parameter time C = 3; parameter realtime D = 4;',
      [
        'parameter integer signed A=1;',
        'parameter real B=real 2.5;',
        'parameter time C=3;',
        'parameter realtime D=4;',
      ],
    ],
    ['localparam signed [1:0] A = 1:2:3;', ['localparam signed [1:0] A=2;']],
    ['specparam t = 3, u$v = (1:2:3); wire a;', ['wire a;']],
    ['defparam u1.W = 8, u1.v.X = "s";', ['defparam u1.W=8;', 'defparam u1.v.X="s";']],
    ['defparam g[2].u.W = 8;', ['defparam g[2].u.W=8;']],
  ])('%s', (body, shown) => {
    expect(items(body)).toEqual(shown);
  });
});

describe('faults', () => {
  it.each([
    ['wire ;', "1:16 ';' expected the name to declare, found ';'"],
    ['wire a b;', "1:18 'b' expected ',' or ';' after the declared name, found 'b'"],
    ['reg [3 a;', "1:18 'a' expected ':' between the ends of the range, found 'a'"],
    ['reg reg;', "1:15 'reg' expected the name to declare, found 'reg'"],
    ['parameter A;', "1:22 ';' expected '=' and the value of the parameter, found ';'"],
    [
      'parameter A = 1 B = 2;',
      "1:27 'B' expected ',' or ';' after the value of the parameter, found 'B'",
    ],
    ['defparam u1.W;', "1:24 ';' expected '=' and the value of the parameter, found ';'"],
    ['defparam u1[0] = 1;', "1:26 '=' expected the name of a parameter, found '='"],
    ['assign a;', "1:19 ';' expected '=' and the value of the assignment, found ';'"],
    ['assign a = b c;', "1:24 'c' expected ';' after the assignment, found 'c'"],
    [
      'assign (strong0, strong) a = b;',
      "1:28 'strong' expected a strength, such as strong0 or pull1, found 'strong'",
    ],
  ])('%s', (body, problem) => {
    expect(onlyProblem(`module m; ${body}\nendmodule`)).toBe(`syntax-error ${problem}`);
  });
});
