import { describe, expect, it } from 'vitest';
import { items, onlyProblem, read } from './reading.js';

/** A statement, read from the body of `initial`. */
function statement(text: string): string {
  const shown = items(`initial ${text}`);
  if (shown.length !== 1) throw new Error(shown.join('\n'));
  return shown[0]!.slice('initial '.length);
}

describe('statements', () => {
  it.each([
    ['q = a;', 'q=a;'],
    ['q <= a <= b;', 'q<=(a<=b);'],
    ['q[3] <= a;', 'q[3]<=a;'],
    ['m[i][3:0] = a;', 'm[i][3:0]=a;'],
    ['{c, s[1:0]} = a + b;', '{c,s[1:0]}=(a+b);'],
    ['u.v.q = a;', 'u.v.q=a;'],
    ['g[1].q = a;', 'g[1].q=a;'],
    ['q = #3 a;', 'q=# a;'],
    ['q = #0 a;', 'q=a;'],
    ['q <= #(1:2:3) a;', 'q<=# a;'],
    ["q <= #1 'b1;", "q<=# '1;"],
    ["q <= #0 'd1;", "q<='1;"],
    ["q <= #4'd1 a;", 'q<=# a;'],
    ['q = @(posedge c) a;', '<@>'],
    ['q <= repeat (3) @c a;', '<@>'],
    ['if (a) b = 1;', 'if(a) b=1;'],
    ['if (a) b = 1; else c = 2;', 'if(a) b=1; else c=2;'],
    ['if (a) if (b) c = 1; else d = 1;', 'if(a) if(b) c=1; else d=1;'],
    ['if (a) b = 1; else if (c) d = 1; else e = 1;', 'if(a) b=1; else if(c) d=1; else e=1;'],
    ['if (a) ; else b = 1;', 'if(a) ; else b=1;'],
    [
      'case (a) 1: b = 1; 2, 3: b = 2; default: b = 3; endcase',
      'case(a) 1: b=1; 2,3: b=2; default: b=3; endcase',
    ],
    ["casez (a) 2'b1?: ; default ; endcase", "casez(a) 2'1z: ; default: ; endcase"],
    ["casex ({a, b}) 2'bx1: c = 1; endcase", "casex({a,b}) 2'x1: c=1; endcase"],
    ['for (i = 0; i < 8; i = i + 1) a[i] = b[i];', 'for(i=0;(i<8);i=(i+1);) a[i]=b[i];'],
    ['repeat (3) a = b;', 'repeat(3) a=b;'],
    ['while (a < 3) a = a + 1;', 'while((a<3)) a=(a+1);'],
    ['forever #5 c = ~c;', 'forever # c=(~c);'],
    ['#5 a = 1;', '# a=1;'],
    ['#0 a = 1;', 'a=1;'],
    ['#(T / 2) ;', '# ;'],
    ['#T a = 1;', '# a=1;'],
    ['@(posedge c) a = 1;', '@(posedge c) a=1;'],
    ['@(posedge c or negedge r, s) ;', '@(posedge c,negedge r,s) ;'],
    ['@c ;', '@(c) ;'],
    ['@u.c ;', '@(u.c) ;'],
    ['@* a = b;', '@(*) a=b;'],
    ['@(*) a = b;', '@(*) a=b;'],
    ['@ ( * ) a = b;', '@(*) a=b;'],
    ['@(a or b + c) ;', '@(a,(b+c)) ;'],
    ['wait (a) b = 1;', 'wait(a) b=1;'],
    ['wait (a);', 'wait(a) ;'],
    ['begin end', 'begin end'],
    ['begin a = 1; b = 2; end', 'begin a=1; b=2; end'],
    [
      'begin : x reg [3:0] a; integer i; a = 1; end',
      'begin:x reg [3:0] a; integer signed i; a=1; end',
    ],
    [
      'begin : x parameter P = 1; localparam L = 2; real r; event e; end',
      'begin:x parameter P=1; localparam L=2; real r; event e; end',
    ],
    ['t;', 't();'],
    ['t(a, b + 1);', 't(a,(b+1));'],
    ['u.t(a);', 'u.t(a);'],
    ['$display("%d", a);', '$display("%d",a);'],
    ['$finish;', '$finish();'],
    ['$monitor(a,,b);', '$monitor(a,b);'],
    ['disable x.y;', 'disable x.y;'],
    ['-> e;', '<->>'],
    ['assign q = a;', '<assign>'],
    ['deassign q;', '<deassign>'],
    ['force u.q[1] = a;', '<force>'],
    ['release {a, b};', '<release>'],
    ['fork : f reg x; a = 1; #3 b = 2; join', '<fork>'],
    [';', ';'],
  ])('%s', (text, shown) => {
    expect(statement(text)).toBe(shown);
  });

  it('case attributes are noted', () => {
    expect(statement('(* full_case, parallel_case = 1 *) case (a) 1: ; endcase')).toBe(
      '(*full_case,parallel_case*)case(a) 1: ; endcase',
    );
    expect(statement('begin (* full_case *) a = 1; case (a) 1: ; endcase end')).toBe(
      'begin a=1; case(a) 1: ; endcase end',
    );
  });

  it('a statement spans its text', () => {
    const text = 'module m; always @(posedge c) begin : x if (a) q <= #1 b; end endmodule';
    const item = read(text).syntax.modules[0]!.items[0]!;
    if (item.kind !== 'always' || item.body.kind !== 'event') throw new Error(item.kind);
    const block = item.body.body;
    if (block.kind !== 'block') throw new Error(block.kind);
    const spanned = [item, item.body, block, block.body[0]!].map(({ start, end }) =>
      text.slice(start, end),
    );
    expect(spanned).toEqual([
      'always @(posedge c) begin : x if (a) q <= #1 b; end',
      '@(posedge c) begin : x if (a) q <= #1 b; end',
      'begin : x if (a) q <= #1 b; end',
      'if (a) q <= #1 b;',
    ]);
  });

  it('a chain of 100000 else ifs is read', () => {
    const chain = 'if (a) b = 1; else '.repeat(100_000);
    const item = read(`module m; initial ${chain}; endmodule`).syntax.modules[0]!.items[0]!;
    if (item.kind !== 'initial') throw new Error(item.kind);
    let length = 0;
    for (let body = item.body; body.kind === 'if'; body = body.whenFalse!) length++;
    expect(length).toBe(100_000);
  });

  it.each([
    ['blocks', (n: number) => 'begin '.repeat(n) + 'end '.repeat(n)],
    ['ifs', (n: number) => `${'if (a) '.repeat(n)};`],
    ['loops', (n: number) => `${'repeat (2) '.repeat(n)};`],
    ['events', (n: number) => `${'@(a) '.repeat(n)};`],
    ['cases', (n: number) => `${'case (a) 1: '.repeat(n / 2)};${' endcase'.repeat(n / 2)}`],
  ])('400 nested %s are read, 100000 are refused', (_what, nested) => {
    const text = (n: number): string => `module m; initial ${nested(n)}\nendmodule`;
    expect(read(text(400)).problems).toEqual([]);
    expect(onlyProblem(text(100_000))).toMatch(/nested more than 500 levels deep/);
  });
});

describe('faults', () => {
  it.each([
    ['a + 1;', "1:21 '+' expected '=' or '<=' after the target, found '+'"],
    ['a = 1', "1:24 '' expected ';' after the assignment, found 'endmodule' on a later line"],
    ['u[1](a);', "1:23 '(' expected '=' or '<=' after the target, found '('"],
    ['if a b = 1;', "1:22 'a' expected '(', found 'a'"],
    [
      'case (a) 1 b = 1; endcase',
      "1:30 'b' expected ':' after the label of the case item, found 'b'",
    ],
    ['case (a) 1: ;', "2:1 'endmodule' expected a case item or 'endcase', found 'endmodule'"],
    ['for (i = 0, j = 1; i; i = 0) ;', "1:29 ',' expected ';', found ','"],
    ['for (i = 0; i; i) ;', "1:35 ')' expected '=' and a value, such as in i = i + 1, found ')'"],
    ['begin a = 1;', "2:1 'endmodule' expected a statement or 'end', found 'endmodule'"],
    ['fork a = 1;', "2:1 'endmodule' expected a statement or 'join', found 'endmodule'"],
    [
      'begin reg a; a = 1; end',
      "1:25 'reg' only a block with a name has declarations; write begin : NAME",
    ],
    ['begin : 1 end', "1:27 '1' expected the name of the block after ':', found a number"],
    ['begin wire a; end', "1:25 'wire' expected a statement, found 'wire'"],
    ['@(posedge c ;', "1:31 ';' expected 'or', ',' or ')' after the event, found ';'"],
    ['@1 ;', "1:20 '1' expected a name, found a number"],
    ['disable a[1];', "1:31 ';' expected the name of a block or task, found ';'"],
    ['assign a;', "1:27 ';' expected '=', found ';'"],
    ['#- ;', "1:20 '-' expected a number, a name or '(' after '#', found '-'"],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`module m; initial ${text}\nendmodule`)).toBe(`syntax-error ${problem}`);
  });

  it('each faulty statement of a block is reported, and the rest is read', () => {
    const { syntax, problems } = read(
      'module m; initial begin a = ; b = 1; if (c d) e = 1; else f = 1; case (g) 1 h; 2: i = ; endcase j = 1; end wire k; endmodule',
    );
    expect(problems.map((problem) => problem.split(' ')[1])).toEqual([
      '1:29',
      '1:44',
      '1:77',
      '1:87',
    ]);
    const [process, wire] = syntax.modules[0]!.items;
    if (process?.kind !== 'initial' || process.body.kind !== 'block') throw new Error('no block');
    expect(process.body.body.map((one) => one.kind)).toEqual(['assign', 'case', 'assign']);
    expect(wire?.kind).toBe('declaration');
  });
});
