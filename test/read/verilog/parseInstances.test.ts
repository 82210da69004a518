import { describe, expect, it } from 'vitest';
import { builtinGates } from '../../../compiler/read/verilog/instances.js';
import { items, onlyProblem, read, readWell } from './reading.js';

describe('module instances', () => {
  it.each([
    ['by position', 'inv u1 (a, b);', ['inv u1(a,b);']],
    ['by name', 'inv u1 (.Y(a), .A(b));', ['inv u1(.Y(a),.A(b));']],
    ['bits', 'inv u1 (a[3], .Y (b[0]));', ['inv u1(a[3],.Y(b[0]));']],
    ['escaped names', 'inv \\u/1  (.\\Y[0] (\\a[1] ));', ['inv u/1(.Y[0](a[1]));']],
    [
      'empty places',
      'inv u1 (a, , b,), u2 (.A(), .Y(a)), u3 ();',
      ['inv u1(a,,b,);', 'inv u2(.A(),.Y(a));', 'inv u3();'],
    ],
    ['constants', "inv u1 (1'b0, .A(4'd3));", ["inv u1(=1'0,.A(=4'0011));"]],
    [
      'parts and words',
      'inv u1 (a[3:0], a[i], m[1][2], a[1 +: 2]);',
      ['inv u1(=a[3:0],=a[i],=m[1][2],=a[1+:2]);'],
    ],
    ['an index with a width', "inv u1 (a[2'd3], a[3'd1:0]);", ["inv u1(=a[2'11],=a[3'001:0]);"]],
    [
      'an index that is a sum',
      'inv u1 (a[1 + 2], a[1] & b, a[1][0] | c);',
      ['inv u1(=a[(1+2)],=(a[1]&b),=(a[1][0]|c));'],
    ],
    ['an index beyond 31 bits', 'inv u1 (a[4294967296]);', ['inv u1(=a[4294967296]);']],
    [
      'expressions',
      'inv u1 (a & b, {a, b}, ~a, f(a), u.a, g[1].a, (a), a ? b : c);',
      ['inv u1(=(a&b),={a,b},=(~a),=f(a),=u.a,=g[1].a,=a,=(a?b:c));'],
    ],
    ['parameters by position', 'ram #(8, W - 1) u1 (a);', ['ram #(8,(W-1)) u1(a);']],
    [
      'parameters by name',
      'ram #(.W(8), .D(), .X(1:2:3)) u1 (a), u2 (b);',
      ['ram #(.W(8),.X(2)) u1(a);', 'ram #(.W(8),.X(2)) u2(b);'],
    ],
    ['no parameters', 'ram #() u1 (a);', ['ram u1(a);']],
    [
      'a delay without parentheses',
      'udp #5 u1 (a); udp #1.5 (b); udp #D (c);',
      ['udp #(5) u1(a);', 'udp #(real 1.5) (b);', 'udp #(D) (c);'],
    ],
    ['a range', 'inv u [3:0] (a, b), v (c);', ['inv u[3:0](a,b);', 'inv v(c);']],
    ['no name', 'udp (a, b), (c, d), u (e);', ['udp (a,b);', 'udp (c,d);', 'udp u(e);']],
    [
      'strengths',
      'udp (weak0, pull1) #2 u1 (a); udp (strong1, highz0) (b);',
      ['udp (weak0,pull1) #(2) u1(a);', 'udp (highz0,strong1) (b);'],
    ],
    ['attributes', '(* keep *) inv (* x = 1 *) u1 ((* y *) .Y(a));', ['inv u1(.Y(a));']],
  ])('have %s', (_what, body, shown) => {
    expect(items(body)).toEqual(shown);
  });
});

describe('gate instances', () => {
  it('all gates and switches are known', () => {
    const body = builtinGates.map((gate) => `${gate} (a, b, c);`).join('\n');
    expect(items(body)).toEqual(builtinGates.map((gate) => `${gate} (a,b,c);`));
  });

  it.each([
    ['names', 'and g1 (y, a, b[2]), g2 (z, c, d);', ['and g1(y,a,b[2]);', 'and g2(z,c,d);']],
    ['no names', 'nor (y, a), (z, b);', ['nor (y,a);', 'nor (z,b);']],
    [
      'delays',
      'not #3 (y, a); buf #(1, 2) g (y, a); bufif0 #(1:2:3, 4, T) (y, a, e);',
      ['not (y,a);', 'buf g(y,a);', 'bufif0 (y,a,e);'],
    ],
    [
      'strengths',
      'or (supply0, highz1) #2 g (y, a, b); pullup (pull1) (y); pulldown (weak0) p (z);',
      [
        'or (supply0,highz1) g(y,a,b);',
        'pullup (strong0,pull1) (y);',
        'pulldown (weak0,strong1) p(z);',
      ],
    ],
    ['expressions', "xor g (y, a & b, 1'b1);", ["xor g(y,=(a&b),=1'1);"]],
    ['a range', 'nand g [0:1] (y, a, b);', ['nand g[0:1](y,a,b);']],
  ])('have %s', (_what, body, shown) => {
    expect(items(body)).toEqual(shown);
  });
});

describe('the table of instances', () => {
  it('instances that follow each other share an item', () => {
    const { modules } = readWell(
      'module m; inv a (x), b (y); and (p, q); wire w; not (p, q); endmodule',
    );
    const spans = modules[0]!.items.map((item) =>
      item.kind === 'instances' ? [item.first, item.count] : item.kind,
    );
    expect(spans).toEqual([[0, 3], 'declaration', [3, 1]]);
  });

  it('whole signals and bits make no expressions', () => {
    const { modules } = readWell('module m; inv a (.x(y), .z(w[3])), b (c, d[1]); endmodule');
    expect(modules[0]!.instances.expressions).toEqual([]);
  });

  it('instances and connections have places', () => {
    const text = 'module m; inv a (.x(y), .z()), b (c[1], ~d); endmodule';
    const { instances } = readWell(text).modules[0]!;
    const places = [0, 1].map((i) => text.slice(instances.position(i)).split(' ')[0]);
    expect(places).toEqual(['inv', 'b']);
    const connections = [0, 1, 2, 3].map((c) => text.slice(instances.connectionPosition(c))[0]);
    expect(connections).toEqual(['y', '.', 'c', '~']);
  });

  it('each module has a table of its own', () => {
    const { modules } = readWell('module a; inv i (x); endmodule module b; inv j (x); endmodule');
    expect(modules.map(({ instances }) => instances.count)).toEqual([1, 1]);
  });
});

describe('faults', () => {
  it.each([
    ['inv u1 a;', "1:18 'a' expected '(' and the connections of the instance, found 'a'"],
    ['inv u1;', "1:17 ';' expected '(' and the connections of the instance, found ';'"],
    ['inv = 1;', "1:15 '=' expected the name of an instance, found '='"],
    ['inv u1 (a b);', "1:21 'b' expected ',' or ')', found 'b'"],
    ['inv u1 (.a b);', "1:22 'b' expected '(' and the connection of the port, found 'b'"],
    ['inv u1 (.1(b));', "1:20 '1' expected the name of a port after '.', found a number"],
    ['inv u1 (.a(b c));', "1:24 'c' expected ')', found 'c'"],
    ['inv u1 (.a(b, c));', "1:23 ',' expected ')', found ','"],
    ['inv u1 (a) u2 (b);', "1:22 'u2' expected ';', found 'u2'"],
    ['inv u1 (a[1);', "1:22 ')' expected ']', found ')'"],
    [
      'inv u1 [3] (a);',
      "1:20 ']' expected ':' between the ends of the range, found ']'; a size alone in brackets is a " +
        'form of SystemVerilog, but IEEE 1364-2005 Verilog is read here: write both ends, such as ' +
        '[0:3] for [4]',
    ],
    ['inv #(.1(8)) u1 (a);', "1:18 '1' expected the name of a parameter after '.', found a number"],
    ['inv #(.W 8) u1 (a);', "1:20 '8' expected '(', found a number"],
    ['inv #+ u1 (a);', "1:16 '+' expected a number, a name or '(' after '#', found '+'"],
    [
      'and (strong0, a) (y, b);',
      "1:25 'a' expected a strength, such as strong0 or pull1, found 'a'",
    ],
    ['and g1 = 1;', "1:18 '=' expected '(' and the connections of the instance, found '='"],
  ])('%s', (body, problem) => {
    expect(onlyProblem(`module m; ${body}\nendmodule`)).toBe(`syntax-error ${problem}`);
  });

  it('reading goes on with the next item', () => {
    const { syntax, problems } = read('module m; inv u1 (a b); inv u2 (c); endmodule');
    expect(problems).toHaveLength(1);
    const { items, instances } = syntax.modules[0]!;
    const named = items.map((item) => item.kind === 'instances' && instances.name(item.first));
    expect(named.map((id) => id && syntax.names.text(id))).toEqual(['u2']);
  });
});
