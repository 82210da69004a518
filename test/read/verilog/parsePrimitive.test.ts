import { describe, expect, it } from 'vitest';
import { onlyProblem, read, readWell } from './reading.js';

/** A primitive as `name(ports) flags` and its rows. */
function primitive(text: string): { head: string; rows: string[] } {
  const { primitives, names } = readWell(text);
  const [one] = primitives;
  if (one === undefined || primitives.length !== 1) throw new Error('not one primitive');
  const ports = one.ports.map((id) => names.text(id)).join(',');
  const initial = one.initial === undefined ? '' : ` = ${one.initial}`;
  const head = `${names.text(one.name)}(${ports})${one.sequential ? ' reg' : ''}${initial}`;
  const rows = one.rows.map(({ inputs, state, output }) =>
    [inputs.join(' '), state, output].filter((field) => field !== undefined).join(' : '),
  );
  return { head, rows };
}

const wrap = (rows: string): string =>
  `primitive p (q, a, b);\noutput q; input a, b;\ntable\n${rows}\nendtable\nendprimitive`;
const wrapReg = (rows: string): string =>
  `primitive p (output reg q, input a, b);\ntable\n${rows}\nendtable\nendprimitive`;

describe('primitives', () => {
  it('have rows of levels', () => {
    expect(primitive(wrap('0 0 : 0;\n  0 1 : 1 ; // comment\n1?:x;\nB X : X;'))).toEqual({
      head: 'p(q,a,b)',
      rows: ['0 0 : 0', '0 1 : 1', '1 ? : x', 'b x : x'],
    });
  });

  it('have rows without white space', () => {
    expect(primitive(wrap('00:0;01:1;1x:1;?b:x;')).rows).toEqual([
      ...['0 0 : 0', '0 1 : 1', '1 x : 1', '? b : x'],
    ]);
  });

  it('have edges and a state after reg', () => {
    const rows =
      'r 0 : ? : 0 ;\n(01) 1 : ? : 1 ;\nf ? : ? : - ;\n(?x) b:1:-;\n? * : 0 : x; p 1 : b : 1; n 0 : x : -; (bx)0:?:-;';
    expect(primitive(wrapReg(rows))).toEqual({
      head: 'p(q,a,b) reg',
      rows: [
        'r 0 : ? : 0',
        '(01) 1 : ? : 1',
        'f ? : ? : -',
        '(?x) b : 1 : -',
        '? * : 0 : x',
        'p 1 : b : 1',
        'n 0 : x : -',
        '(bx) 0 : ? : -',
      ],
    });
  });

  it.each([
    ["primitive p (q, a); output q; reg q; input a; initial q = 1'b1;", 'p(q,a) reg = 1'],
    ["primitive p (q, a); input a; output reg q = 1'bx;", 'p(q,a) reg = 2'],
    ['primitive p (output reg q = 0, input a, input b, c);', 'p(q,a,b,c) reg = 0'],
    ['primitive p (q, a, b); output q; reg q; input a; input b;', 'p(q,a,b) reg'],
  ])('%s', (text, head) => {
    const row = head.includes('b,c')
      ? '0 0 0 : ? : 0;'
      : head.includes('b')
        ? '0 0 : ? : 0;'
        : '0 : ? : 0;';
    expect(primitive(`${text} table ${row} endtable endprimitive`).head).toBe(head);
  });

  it('tables see macros and conditional text', () => {
    const text = `\`define HOLD : ? : -;\n${wrapReg('r 0 : ? : 0;\n`ifdef X\n1 1 1\n`endif\n? ? `HOLD')}`;
    expect(primitive(text).rows).toEqual(['r 0 : ? : 0', '? ? : ? : -']);
  });

  it('a row spans its text', () => {
    const text = wrap('0 0 : 0;\n1 1 : 1 ;');
    const { start, end } = readWell(text).primitives[0]!.rows[1]!;
    expect(text.slice(start, end)).toBe('1 1 : 1 ;');
  });
});

describe('faults of rows', () => {
  it.each([
    [wrap('0 : 0;'), "4:1 '0 : 0;' the row has 1 input symbols, but the primitive has 2 inputs"],
    [
      wrap('0 0 : ? : 0;'),
      "4:1 '0 0 : ? : 0;' a row of a primitive without a reg is 'inputs : output ;'",
    ],
    [
      wrapReg('0 0 : 0;'),
      "3:1 '0 0 : 0;' a row of a primitive with a reg is 'inputs : state : output ;'",
    ],
    [wrap('0 - : 0;'), "4:1 '0 - : 0;' '-' stands for no change of the output, not for an input"],
    [wrap('0 r : 0;'), "4:1 '0 r : 0;' only a primitive with a reg has edges in its rows"],
    [wrapReg('r f : ? : 0;'), "3:1 'r f : ? : 0;' a row has one edge at most"],
    [wrapReg('0 f : r : 0;'), "3:1 '0 f : r : 0;' the state of a row is one of 0 1 x ? b"],
    [wrap('0 0 : ?;'), "4:1 '0 0 : ?;' the output of a row is one of 0 1 x"],
    [wrap('0 0 : -;'), "4:1 '0 0 : -;' the output of a row is one of 0 1 x"],
    [wrapReg('0 0 : ? : 0 1;'), "3:1 '0 0 : ? : 0 1;' the output of a row is one of 0 1 x -"],
    [wrap('0 z : 0;'), "4:1 '0 z : 0;' 'z' is no symbol of a table"],
    [wrapReg('(0 1 : ? : 0;'), "3:1 '(0 1 : ? : 0;' ':' is no symbol of a table"],
    [wrapReg('(r0) 1 : ? : 0;'), "3:1 '(r0) 1 : ? : 0;' 'r' is no symbol of a table"],
    [wrap('0 0 : 0'), "4:1 '0 0 : 0\nendtable' the row has no ';'"],
  ])('%j', (text, problem) => {
    expect(onlyProblem(text)).toBe(`syntax-error ${problem}`);
  });

  it('reading goes on with the next row', () => {
    const { syntax, problems } = read(wrap('0 z : 0;\n1 1 : 1;\n0 : 1;'));
    expect(problems).toHaveLength(2);
    expect(syntax.primitives[0]!.rows).toHaveLength(1);
  });
});

describe('faults of heads', () => {
  const table = 'table 0 : 0; endtable endprimitive';
  it.each([
    [`primitive (q, a); ${table}`, "1:11 '(' expected the name of the primitive, found '('"],
    [`primitive p; ${table}`, "1:12 ';' expected '(', found ';'"],
    ...['output 1;', 'output reg 1;', 'reg 1;', 'initial 1 = 0;'].map((declaration) => [
      `primitive p (q, a); ${declaration} ${table}`,
      `1:${21 + declaration.indexOf('1')} '1' expected the name of the output, found a number`,
    ]),
    [
      `primitive p (output 1, a); ${table}`,
      "1:21 '1' expected the name of the output, found a number",
    ],
    [`primitive p (q, 1); ${table}`, "1:17 '1' expected the name of a port, found a number"],
    [
      `primitive p (q, a); input a; output a; ${table}`,
      "1:11 'p' the first port of a primitive is its one output",
    ],
    [`primitive p (q, a); output q; ${table}`, "1:11 'p' the port 'a' is not declared as an input"],
    [`primitive p (q); output q; ${table}`, "1:11 'p' a primitive has one input at least"],
    [
      `primitive p (q, a); wire q; ${table}`,
      "1:21 'wire' expected a declaration or the 'table' of the primitive, found 'wire'",
    ],
    [
      `primitive p (output reg q = 2, input a); ${table}`,
      "1:29 '2' a primitive starts with 0, 1 or 1'bx",
    ],
    [
      `primitive p (output q, input a, output b); ${table}`,
      "1:33 'output' expected the name of an input, found 'output'",
    ],
    [
      'primitive p (output q, input a); endprimitive',
      "1:34 'endprimitive' expected a declaration or the 'table' of the primitive, found 'endprimitive'",
    ],
    [
      'primitive p (output q, input a); table 0 : 0; endprimitive',
      "1:47 'endprimitive' expected a row of the table or 'endtable', found 'endprimitive'",
    ],
    [
      'primitive p (output q, input a); table 0 : 0; endtable module m; endmodule',
      "1:56 'module' expected 'endprimitive', found 'module'",
    ],
  ])('%s', (text, problem) => {
    expect(onlyProblem(text)).toBe(`syntax-error ${problem}`);
  });

  it('what follows a faulty primitive is read', () => {
    const { syntax, problems } = read(`primitive p (q; ${table}\nmodule m; endmodule`);
    expect(problems).toHaveLength(1);
    expect(syntax.modules).toHaveLength(1);
  });
});
