import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { responseTo } from '../../sequential/courses.js';
import { play, referenceFor } from '../../support/rows.js';
import { cellCircuit, cellDesign } from './reading.js';

const inputs = (...names: string[]): string =>
  names.map((name) => `pin (${name}) { direction : input; }`).join(' ');
const table = (header: string, rows: string): string =>
  `statetable (${header}) { table : "${rows}"; }`;
const node = (name: string): string =>
  `pin (${name}) { direction : output; internal_node : "${name}"; }`;

/** Rows of two inputs of which one changes at a time, with x and with values in place of the x. */
function coursesOf(changes: readonly (readonly [number, string, number])[]): [string[], string[]] {
  const levels = ['0', '0'];
  const values = ['0', '0'];
  const courses: [string[], string[]] = [['00'], ['00']];
  for (const [input, level, instead] of changes) {
    // While it stays x it stands for one value.
    if (level !== 'x' || levels[input] !== 'x')
      values[input] = level === 'x' ? `${instead}` : level;
    levels[input] = level;
    courses[0].push(levels.join(''));
    courses[1].push(values.join(''));
  }
  return courses;
}

const bits = (count: number) => fc.array(fc.nat(1), { minLength: count, maxLength: count });

/** Whether a state table and another description give the same value at all times. */
function agree(stateTable: string, other: string, pins: readonly string[], state: string): void {
  const circuit = cellCircuit(`${inputs(...pins)} ${stateTable}
    pin (N) { direction : internal; internal_node : "${state}"; } ${other}
    pin (SAME) { direction : output; function : "!(N ^ OTHER)"; }
    pin (Q) { direction : output; function : "N"; }`);
  const width = circuit.inputs.length - (pins.includes('CK') ? 1 : 0);
  fc.assert(
    fc.property(fc.array(bits(width), { minLength: 1, maxLength: 20 }), (rows) => {
      const response = play(
        referenceFor(circuit),
        rows.map((row) => row.join('')),
      );
      expect(response.map((row) => row[0])).toEqual(rows.map(() => '1'));
    }),
    { seed: 20260106, numRuns: 60 },
  );
}

describe('a state table', () => {
  it.each([
    ['a latch', '"G D", "N"', 'H L : - : L, H H : - : H, L - : - : N'],
    ['a latch by pairs', '"G D", "N"', 'H L/H : - : L/H, L - : - : N'],
    ['a latch that keeps its value', '"G D", "N"', 'H H/L : - : H/L, L - : L : L, L - : H : H'],
    ['a latch by order of rows', '"G D", "N"', 'L - : - : N, - L : - : L, - - : - : H'],
  ])('may be %s', (_what, header, rows) => {
    const latch = 'latch (OTHER, ON) { enable : "G"; data_in : "D"; }';
    agree(table(header, rows), latch, ['G', 'D'], 'N');
  });

  it('may be a latch with clear and preset', () => {
    agree(
      table(
        '"G D R S", "N"',
        '- - H - : - : L, - - L H : - : H, H L/H L L : - : L/H, L - L L : - : N',
      ),
      `latch (OTHER, ON) { enable : "G"; data_in : "D"; clear : "R"; preset : "S";
        clear_preset_var1 : L; }`,
      ['G', 'D', 'R', 'S'],
      'N',
    );
  });

  it.each([
    ['by pairs', 'R L/H : - : L/H, ~R - : - : N'],
    ['by single rows', 'R H : - : H, R L : - : L, F - : - : N, L - : - : N, H - : - : N'],
  ])('may be a flip-flop %s', (_what, rows) => {
    const ff = 'ff (OTHER, ON) { clocked_on : "CK"; next_state : "D"; }';
    agree(table('"CK D", "N"', rows), ff, ['CK', 'D'], 'N');
  });

  it('may be a flip-flop of the falling edge with an enable and a clear', () => {
    agree(
      table(
        '"CK D E RN", "N"',
        '- - - L : - : L, F L/H H H : - : L/H, F - L H : - : N, ~F - - H : - : N',
      ),
      'ff (OTHER, ON) { clocked_on : "!CK"; next_state : "(D & E) | (OTHER & !E)"; clear : "!RN"; }',
      ['CK', 'D', 'E', 'RN'],
      'N',
    );
  });

  it('may toggle', () => {
    agree(
      table(
        '"J K CK CD", "N"',
        `- - - L : - : L,
         - - ~F H : - : N, \\
         L L F H : L/H : L/H, H L F H : - : H,
         L H F H : - : L, H H F H : L/H : H/L`,
      ),
      `ff (OTHER, ON) { clocked_on : "!CK"; next_state : "(J & ON) | (!K & OTHER)";
        clear : "!CD"; }`,
      ['J', 'K', 'CK', 'CD'],
      'N',
    );
  });

  it('may be the latch of a clock gate, named in a state function', () => {
    const circuit = cellCircuit(`clock_gating_integrated_cell : "latch_posedge_precontrol";
      ${table('"CK E SE", "IQ"', 'L L L : - : L, L L H : - : H, L H - : - : H, H - - : - : N')}
      ${inputs('CK', 'E', 'SE', 'D')}
      pin (IQ) { direction : internal; internal_node : "IQ"; }
      pin (G) { direction : internal; state_function : "CK & IQ"; }
      ff (FQ, FQN) { clocked_on : "G"; next_state : "D"; }
      pin (Q) { direction : output; function : "FQ"; }`);
    expect(circuit.latches.count).toBe(1);
    const rows = ['101', '000', '100', '011', '000', '000'];
    expect(play(referenceFor(circuit), rows)).toEqual(['0', '1', '1', '0', '1', '1']);
  });

  it('may have several nodes that read each other', () => {
    agree(
      table(
        '"CK D", "M S"',
        'L L/H : - - : L/H N, H - : L/H - : N L/H, L - : - - : N N, H - : - - : N N',
      ),
      'ff (OTHER, ON) { clocked_on : "CK"; next_state : "D"; }',
      ['CK', 'D'],
      'S',
    );
  });

  it('says nothing of a node with - among the next states', () => {
    agree(
      table('"CK D", "M N"', 'L - : - - : - N, H L/H : - - : N L/H, - - : - - : N N'),
      'latch (OTHER, ON) { enable : "CK"; data_in : "D"; }',
      ['CK', 'D'],
      'N',
    );
  });

  it('is unknown where no row matches', () => {
    const circuit = cellCircuit(`${inputs('R', 'S')}
      ${table('"R S", "Q"', 'H L : - : L, L H : - : H, L L : - : N')} ${node('Q')}`);
    const rows = ['01', '00', '11', '00', '10'];
    expect(play(referenceFor(circuit, true), rows)).toEqual(['1', '1', 'x', 'x', '0']);
  });

  it('is there once for each pin with an input_map', () => {
    const circuit = cellCircuit(`${inputs('G', 'A', 'B')}
      ${table('"E D", "Q"', 'H L/H : - : L/H, L - : - : N')}
      pin (P) { direction : output; internal_node : "Q"; input_map : "G A"; }
      pin (R) { direction : output; internal_node : "Q"; input_map : "G, B, R"; inverted_output : true; }`);
    expect(circuit.latches.count).toBe(2);
    expect(play(referenceFor(circuit), ['110', '001', '101', '010'])).toEqual([
      '1 0',
      '1 0',
      '0 1',
      '0 1',
    ]);
  });

  it('serves several pins and functions with one node', () => {
    const circuit = cellCircuit(`${inputs('G', 'D')}
      ${table('"G D", "Q"', 'H L/H : - : L/H, L - : - : N')} ${node('Q')}
      pin (QN) { direction : output; state_function : "Q'"; }
      pin (Q2) { direction : output; internal_node : "Q"; }`);
    expect(circuit.latches.count).toBe(1);
    expect(play(referenceFor(circuit), ['11', '00'])).toEqual(['1 0 1', '1 0 1']);
  });

  it('that no pin shows is not built', () => {
    const circuit =
      cellCircuit(`${inputs('G', 'D')} ${table('"G D", "Q"', 'H L/H : - : L/H, L - : - : N')}
      pin (Y) { direction : output; function : "D"; }`);
    expect(circuit.latches.count).toBe(0);
  });
});

const cure = 'give the cell a Verilog model in a file that is named before the library';

describe('a state table that is no latch or flip-flop', () => {
  const refused =
    'not-supported 3 \'statetable ("CK D", "Q")\' the state table of cell C is not supported:';
  const run =
    'table-run 3 \'statetable ("CK D", "Q")\' the state table of cell C is neither a flip-flop nor a latch:';
  // Rows of CK and D, one change at a time, and what Q is in them, of two and of three values.
  it.each([
    [
      'R L/H : - : L/H, F L/H : - : L/H, - - : - : N',
      'both edges of CK give it a new value',
      '00 01 11 10 00 01 11 01 00 10 00',
      '0  0  1  1  0  0  1  1  1  0  0',
      '00 x0 x1 11 10 1x 0x 00 10 xx x0',
      'x  x  x  x  x  x  x  x  0  0  0',
    ],
    [
      'R L/H : - : L/H, L L : - : L, - - : - : N',
      'its value depends on the level of CK as well as on its edge',
      '00 01 11 10 11 01 00 01 11 1x 11',
      '0  0  1  1  1  1  0  0  1  1  1',
      '00 01 x1 11 10 x0 00 0x 01 x1 11',
      '0  0  x  x  x  x  0  0  0  x  x',
    ],
  ])('runs from its table: %s', async (rows, reason, plain, q, ternary, ternaryQ) => {
    const { problems, circuit } = cellDesign(
      `${table('"CK D", "Q"', rows)}\n${inputs('CK', 'D')} ${node('Q')}`,
    );
    expect(problems).toEqual([`${run} ${reason}. It runs from its table`]);
    const known = plain.replaceAll('x', '1').split(' ');
    expect(await responseTo(circuit!, known, { clocks: [] })).toEqual(q.split(/ +/));
    const three = { clocks: [], threeValued: true };
    expect(await responseTo(circuit!, ternary.split(' '), three)).toEqual(ternaryQ.split(/ +/));
  });

  it('knows with x what it does whatever the x stands for', async () => {
    const symbol = fc.constantFrom('L', 'H', '-', '-', 'R', 'F', '~R', '~F');
    const row = fc
      .tuple(symbol, symbol, fc.constantFrom('-', '-', 'L', 'H'), fc.constantFrom(...'LHNNX'))
      .map(([first, second, state, next]) => `${first} ${second} : ${state} : ${next}`);
    const rows = fc.array(row, { minLength: 1, maxLength: 6 });
    const move = fc.tuple(fc.nat(1), fc.constantFrom(...'01x'), fc.nat(1));
    const moves = fc.array(move, { minLength: 20, maxLength: 40 });
    await fc.assert(
      fc.asyncProperty(rows, moves, async (some, changes) => {
        const text = [...some, '- - : - : N'].join(', ');
        const { problems, circuit } = cellDesign(
          `${table('"A B", "Q"', text)}\n${inputs('A', 'B')} ${node('Q')}`,
        );
        fc.pre(problems.length === 1 && problems[0]!.startsWith('table-run'));
        const [unsure, sure] = coursesOf(changes);
        const options = { clocks: [], powerUp: 'zero' } as const;
        const known = await responseTo(circuit!, unsure, { ...options, threeValued: true });
        const actual = await responseTo(circuit!, sure, options);
        const wrong = known.filter((value, i) => value !== 'x' && value !== actual[i]);
        expect(wrong).toEqual([]);
      }),
      { seed: 20260306, numRuns: 25 },
    );
  });

  it('is refused where nothing gives a node its value', () => {
    const { problems } = cellDesign(
      `${table('"CK D", "Q"', '- - : - : N')}\n${inputs('CK', 'D')} ${node('Q')}`,
    );
    expect(problems).toEqual([`${refused} nothing gives Q a value; ${cure}`]);
  });

  it('is refused beyond ten inputs', () => {
    const names = Array.from({ length: 11 }, (_, i) => `I${i}`);
    const { problems } =
      cellDesign(`${table(`"${names.join(' ')}", "Q"`, `${'H '.repeat(11)}: - : H`)}
      ${inputs(...names)} ${node('Q')}`);
    expect(problems).toHaveLength(1);
    expect(problems[0]).toMatch(
      /is not supported: Q depends on 11 inputs, 10 can be looked through; give/,
    );
  });
});

describe('a state table that makes no sense', () => {
  const problem = (text: string, pin = node('Q')): string => {
    const { problems } = cellDesign(`${text}\n${inputs('G', 'D')}\n${pin}`);
    expect(problems).toHaveLength(1);
    return problems[0]!;
  };

  it.each([
    [
      'H : - : L',
      "'H : - : L' this is no state table: the row has 1 of an input, the header says 2",
    ],
    [
      'H L : L',
      "'H L : L' this is no state table: the row has 0 of a next state, the header says 1",
    ],
    [
      'H L : - : L L',
      "'H L : - : L L' this is no state table: the row has 2 of a next state, the header says 1",
    ],
    ['H L : - : L : L', "':' this is no state table: a row has two ':', got a third"],
    [
      'H L : - : L, H Q : - : L',
      "'Q' this is no state table: an input is one of L H - R F ~R ~F L/H H/L, got Q",
    ],
    ['H L : R : L', "'R' this is no state table: a current state is one of L H - L/H H/L, got R"],
    ['H L : - : R', "'R' this is no state table: a next state is one of L H - N X L/H H/L, got R"],
    [' , ', "' , ' this is no state table: the table has no rows"],
  ])('is reported at the fault: %s', (rows, expected) => {
    expect(problem(table('"G D", "Q"', rows))).toBe(`syntax-error 3 ${expected}`);
  });

  it('is reported without a table', () => {
    expect(problem('statetable ("G D", "Q") { }')).toBe(
      'syntax-error 3 \'statetable ("G D", "Q")\' the state table has no table attribute',
    );
  });

  it('is reported with a column that is no pin', () => {
    expect(problem(table('"G X", "Q"', 'H L/H : - : L/H, L - : - : N'))).toBe(
      'name-undeclared 3 \'statetable ("G X", "Q")\' X is no pin or state of cell C',
    );
  });

  it('is reported at an internal_node that is no column', () => {
    const text = table('"G D", "Q"', 'H L/H : - : L/H, L - : - : N');
    expect(problem(text, 'pin (P) { direction : output; internal_node : "R"; }')).toBe(
      "name-undeclared 5 'R' R is no column of the state table, which has Q",
    );
  });

  it('is reported at an input_map', () => {
    const text = table('"G D", "Q"', 'H L/H : - : L/H, L - : - : N');
    const pin = (map: string) =>
      `pin (Q) { direction : output; internal_node : "Q"; input_map : "${map}"; }`;
    expect(problem(text, pin('G D Q R'))).toBe(
      "range-invalid 5 'G D Q R' input_map has 4 names, the state table 3 columns",
    );
    expect(problem(text, pin('G R'))).toBe(
      "name-undeclared 5 'G R' R is no pin or state of cell C",
    );
  });
});
