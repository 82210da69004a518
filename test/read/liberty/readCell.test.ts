import { describe, expect, it } from 'vitest';
import type { LibertyCell } from '../../../compiler/read/liberty/cell.js';
import { cellOf, cellsOf, readLibrary } from './reading.js';

const pinsOf = ({ pins }: LibertyCell): string[] =>
  pins.map(({ name, direction, function: text }) =>
    `${direction} ${name} ${text?.text ?? ''}`.trim(),
  );

const portsOf = (cell: LibertyCell): string[] =>
  cell.ports.map(({ name, direction, range, pins }) => {
    const bits = range === undefined ? '' : `[${range.from}:${range.to}]`;
    return `${direction} ${name}${bits} = ${pins.map((pin) => cell.pins[pin]!.name).join(' ')}`;
  });

/** The problems kept in a cell: `CODE 'SPANNED TEXT' MESSAGE`. */
function problemsOf(statements: string): string[] {
  const text = `library (t) {\ncell (C) {\n${statements}\n}\n}`;
  const { library, problems } = readLibrary(text);
  expect(problems).toEqual([]);
  return library.cells[0]!.problems.map(
    ({ code, message, start, end }) => `${code} '${text.slice(start, end)}' ${message}`,
  );
}

const type = (name: string, attributes: string): string => `type (${name}) { ${attributes} }`;
const byte = type(
  'byte',
  'base_type : array; bit_width : 4; bit_from : 3; bit_to : 0; downto : true;',
);

describe('pins', () => {
  it('are ports in the order of the library, internal ones not', () => {
    const cell = cellOf(`
      pin (A) { direction : input; }
      pin ("B", C D) { direction : "input"; }
      pin (N) { direction : internal; function : "A"; }
      pin (Y) { direction : output; function : "!N"; }
      pin (P) { direction : inout; }`);
    expect(pinsOf(cell)).toEqual([
      'input A',
      'input B',
      'input C',
      'input D',
      'internal N A',
      'output Y !N',
      'inout P',
    ]);
    expect(cell.ports.map(({ name }) => name)).toEqual(['A', 'B', 'C', 'D', 'Y', 'P']);
  });

  it('without direction are inputs, or outputs where they have a value', () => {
    const cell = cellOf(
      'pin (A) { } pin (Y) { function : "A"; } pin (Z) { state_function : "A"; }',
    );
    expect(pinsOf(cell)).toEqual(['input A', 'output Y A', 'output Z']);
  });

  it('of supply are ports', () => {
    const cell = cellOf('pg_pin (VDD) { pg_type : primary_power; direction : inout; }');
    expect(portsOf(cell)).toEqual(['supply VDD = VDD']);
  });

  it('have one description each', () => {
    expect(problemsOf('pin (A) { }\n pin (A) { direction : output; }')).toEqual([
      "name-redeclared 'pin (A)' pin A is described twice; remove one of the two",
    ]);
    expect(problemsOf('pin (A) { } pg_pin (A) { }')).toHaveLength(1);
    expect(problemsOf('pin (A) { } bundle (A) { members (B); }')).toHaveLength(1);
  });

  it('have a direction of the format', () => {
    expect(problemsOf('pin (A) { direction : sideways; }')).toEqual([
      "syntax-error 'sideways' a direction is input, output, inout or internal, got sideways",
    ]);
  });
});

describe('a bus', () => {
  it('has the bits of its type, and pins that override it', () => {
    const [cell] = cellsOf(`${byte}
      cell (C) {
        bus (D) { bus_type : byte; direction : input; pin (D[3:1]) { } pin (D[0]) { } }
        bus (Q) { bus_type : byte; direction : output; function : "D";
          pin (Q[3], "Q[2]") { function : "!D"; } }
      }`);
    expect(portsOf(cell!)).toEqual([
      'input D[3:0] = D[0] D[1] D[2] D[3]',
      'output Q[3:0] = Q[0] Q[1] Q[2] Q[3]',
    ]);
    expect(pinsOf(cell!).slice(4)).toEqual([
      'output Q[3] !D',
      'output Q[2] !D',
      'output Q[1] D',
      'output Q[0] D',
    ]);
  });

  it.each([
    ['bit_width : 2; bit_from : 0; bit_to : 1;', '[0:1]'],
    ['bit_width : 2; bit_from : 5; bit_to : 4; downto : true;', '[5:4]'],
    ['bit_from : 7; bit_to : 7;', '[7:7]'],
    ['bit_width : 3; downto : true;', '[2:0]'],
    ['bit_width : 3;', '[0:2]'],
  ])('has the range of its type: %s', (attributes, range) => {
    const cell = cellOf(`${type('b', attributes)} bus (A) { bus_type : b; direction : input; }`);
    expect(portsOf(cell)[0]).toMatch(`input A${range} = `);
  });

  it('takes a type of its cell before one of the library', () => {
    const [first, second] = cellsOf(`${type('b', 'bit_width : 2;')}
      cell (A) { ${type('b', 'bit_width : 5;')} bus (A) { bus_type : b; } }
      cell (B) { bus (A) { bus_type : "b"; } }`);
    expect(first!.pins).toHaveLength(5);
    expect(second!.pins).toHaveLength(2);
  });

  it('names its bits in the style of the library', () => {
    const [cell] = cellsOf(`bus_naming_style : "%s<%d>";
      ${byte}
      cell (C) { bus (Q) { bus_type : byte; pin (Q<3>) { function : "1"; }
        pin ("Q<1:0>") { function : "0"; } pin (Q[2]) { function : "A"; } direction : output; } }`);
    expect(pinsOf(cell!)).toEqual([
      'output Q[3] 1',
      'output Q[2] A',
      'output Q[1] 0',
      'output Q[0] 0',
    ]);
    expect(cell!.aliases.get('Q<2>')).toBe('Q[2]');
  });

  it('may be internal', () => {
    const cell = cellOf(`${byte} bus (N) { bus_type : byte; direction : internal; }`);
    expect(cell.ports).toEqual([]);
    expect(cell.pins).toHaveLength(4);
  });

  it.each([
    [
      'bus (A) { direction : input; }',
      "range-invalid 'bus (A)' bus A has no bus_type, which tells its bits",
    ],
    [
      'bus (A) { bus_type : b; }',
      "name-undeclared 'b' no type group describes b, the type of bus A",
    ],
    [
      'type (b) { bit_width : x; } bus (A) { bus_type : b; }',
      "range-invalid 'type (b)' bit_width, bit_from and bit_to of type b do not make a range of 65536 bits at most",
    ],
    [
      'type (b) { bit_width : 3; bit_from : 3; bit_to : 0; } bus (A) { bus_type : b; }',
      "range-invalid 'type (b)' bit_width, bit_from and bit_to of type b do not make a range of 65536 bits at most",
    ],
    [
      'type (b) { bit_width : 99999999; } bus (A) { bus_type : b; }',
      "range-invalid 'type (b)' bit_width, bit_from and bit_to of type b do not make a range of 65536 bits at most",
    ],
    [
      `${byte} bus (A) { bus_type : byte; pin (A[4]) { } }`,
      "range-invalid 'A[4]' A[4] is no bit of bus A, which has [3:0]",
    ],
    [
      `${byte} bus (A) { bus_type : byte; pin (B) { } }`,
      "range-invalid 'B' B is no bit of bus A, which has [3:0]",
    ],
  ])('that makes no sense is a problem of its cell: %s', (text, problem) => {
    expect(problemsOf(text)).toEqual([problem]);
  });
});

describe('a bundle', () => {
  it('gives its members what it says, unless they say otherwise', () => {
    const cell = cellOf(`bundle (Q) { members (Q1, Q2, "Q3"); direction : output; function : "IQ";
      pin (Q2) { function : "IQN"; } }`);
    expect(pinsOf(cell)).toEqual(['output Q1 IQ', 'output Q2 IQN', 'output Q3 IQ']);
    expect(portsOf(cell)).toEqual(['output Q1 = Q1', 'output Q2 = Q2', 'output Q3 = Q3']);
    expect(cell.pins.map(({ place }) => place)).toEqual([0, 1, 2]);
  });

  it('may list its members as pins alone', () => {
    const cell = cellOf('bundle (D) { direction : input; pin (D1) { } pin (D2) { } }');
    expect(pinsOf(cell)).toEqual(['input D1', 'input D2']);
  });
});

describe('state', () => {
  it('has names, functions and what clear and preset together do', () => {
    const [state] = cellOf(`ff ("IQ", "IQN") { clocked_on : "CK"; next_state : "D";
      clear : "!R"; preset : "!S"; clear_preset_var1 : L; clear_preset_var2 : "h";
      power_down_function : "!VDD"; }`).states;
    expect(state).toMatchObject({ kind: 'register', name: 'IQ', inverse: 'IQN', width: undefined });
    expect(state).toMatchObject({ bothState: 'L', bothInverse: 'H' });
    expect([...state!.functions].map(([name, { text }]) => `${name} ${text}`)).toEqual([
      'clocked_on CK',
      'next_state D',
      'clear !R',
      'preset !S',
    ]);
  });

  it('of a bank has a number of bits', () => {
    const { states } = cellOf('ff_bank (IQ, IQN, 4) { } latch_bank (LQ LQN 2) { }');
    expect(states.map(({ kind, name, inverse, width }) => [kind, name, inverse, width])).toEqual([
      ['register', 'IQ', 'IQN', 4],
      ['latch', 'LQ', 'LQN', 2],
    ]);
  });

  it.each([
    [
      'ff_bank (IQ, IQN) { }',
      "range-invalid 'ff_bank (IQ, IQN)' ff_bank needs two names and its number of bits, such as (IQ, IQN, 4)",
    ],
    [
      'latch_bank (IQ, IQN, 0) { }',
      "range-invalid 'latch_bank (IQ, IQN, 0)' latch_bank needs two names and its number of bits, such as (IQ, IQN, 4)",
    ],
    [
      'latch (IQ, IQN) { clear_preset_var1 : Q; }',
      "syntax-error 'Q' clear_preset_var1 is one of L, H, N, T and X, got Q",
    ],
  ])('that makes no sense is a problem of its cell: %s', (text, problem) => {
    expect(problemsOf(text)).toEqual([problem]);
  });

  it('may be a state table', () => {
    const { stateTable } = cellOf('statetable ("CK  E", "IQ IR") { table : "L - : - - : N N"; }');
    expect(stateTable).toMatchObject({ inputs: ['CK', 'E'], nodes: ['IQ', 'IR'] });
    expect(stateTable!.table!.text).toBe('L - : - - : N N');
  });
});

describe('a cell', () => {
  it('tells of its clock gate and its test cell', () => {
    const cell = cellOf(`clock_gating_integrated_cell : "latch_posedge";
      test_cell () { ff (TQ, TQN) { next_state : "SI"; } pin (A) { direction : output; } }
      pin (A) { direction : input; }`);
    expect(cell.clockGate!.text).toBe('latch_posedge');
    expect(cell.hasTestCell).toBe(true);
    expect(cell.states).toEqual([]);
    expect(pinsOf(cell)).toEqual(['input A']);
    expect(cellOf('area : 1;').hasTestCell).toBe(false);
  });
});
