import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { play, referenceFor } from '../../support/rows.js';
import { cellCircuit, cellDesign } from './reading.js';

const X = 2;
type Both = 'L' | 'H' | 'N' | 'T' | 'X' | undefined;
const bothValues: readonly Both[] = ['L', 'H', 'N', 'T', 'X', undefined];

const inputs = (...names: string[]): string =>
  names.map((name) => `pin (${name}) { direction : input; }`).join(' ');
const output = (name: string, text: string): string =>
  `pin (${name}) { direction : output; function : "${text}"; }`;
const both = (var1: Both, var2: Both): string =>
  (var1 === undefined ? '' : `clear_preset_var1 : ${var1}; `) +
  (var2 === undefined ? '' : `clear_preset_var2 : ${var2};`);

/** Rows of D R S (and E of a latch), and what Q and QN then are, sampled before the edge. */
class Model {
  state: number;
  readonly #var1: Both;
  readonly #var2: Both;
  readonly #unknown: number;

  constructor(var1: Both, var2: Both, threeValued: boolean) {
    this.#var1 = var1;
    this.#var2 = var2;
    this.#unknown = threeValued ? X : 0;
    this.state = this.#unknown;
  }

  /** Takes clear and preset; whether they leave the state to the clock or enable. */
  settle(clear: number, preset: number): boolean {
    if (clear === 1 && preset === 1) {
      if (this.#var1 === 'L') this.state = 0;
      else if (this.#var1 === 'H') this.state = 1;
      else if (this.#var1 !== 'N') this.state = this.#unknown;
      return false;
    }
    if (clear === 1) this.state = 0;
    if (preset === 1) this.state = 1;
    return clear + preset === 0;
  }

  shown(clear: number, preset: number): string {
    const natural = this.state === X ? X : 1 - this.state;
    const opposite = { L: 'H', H: 'L', N: 'N', T: 'X', X: 'X' } as const;
    const usual = opposite[this.#var1 ?? 'X'];
    const wanted = this.#var2 === 'T' ? 'X' : (this.#var2 ?? usual);
    const isBoth = clear === 1 && preset === 1 && wanted !== usual;
    const inverse = !isBoth ? natural : wanted === 'L' ? 0 : wanted === 'H' ? 1 : this.#unknown;
    return [this.state, inverse].map((value) => (value === X ? 'x' : value)).join(' ');
  }
}

const bits = (count: number) => fc.array(fc.nat(1), { minLength: count, maxLength: count });
const rowsOf = (width: number) => fc.array(bits(width), { minLength: 1, maxLength: 12 });

describe('a flip-flop', () => {
  it.each(bothValues.flatMap((var1) => bothValues.map((var2) => [var1, var2] as const)))(
    'with clear_preset_var1 %s and clear_preset_var2 %s does what they say',
    (var1, var2) => {
      const circuit = cellCircuit(`${inputs('CK', 'D', 'R', 'S')}
        ff (IQ, IQN) { clocked_on : "CK"; next_state : "D"; clear : "R"; preset : "S";
          ${both(var1, var2)} }
        ${output('Q', 'IQ')} ${output('QN', 'IQN')}`);
      fc.assert(
        fc.property(rowsOf(3), fc.boolean(), (rows, threeValued) => {
          const model = new Model(var1, var2, threeValued);
          const expected = rows.map(([data, clear, preset]) => {
            const isFree = model.settle(clear!, preset!);
            const shown = model.shown(clear!, preset!);
            if (isFree) model.state = data!;
            return shown;
          });
          const texts = rows.map((row) => row.join(''));
          expect(play(referenceFor(circuit, threeValued), texts)).toEqual(expected);
        }),
        { seed: 20260103, numRuns: 30 },
      );
    },
  );

  it.each([
    ['CK', 'D', '', ['0', '1', '0']],
    ['CK', '!D', '', ['0', '0', '1']],
    ['CK', 'D ^ IQ', '', ['0', '1', '1']],
    ['CK', '(D & E) + (IQ & !E)', '', ['0', '1', '1']],
    ['CK', 'IQN', '', ['0', '1', '0']],
    ['CK', 'D', 'clear : "!E";', ['0', '0', '0']],
    ['CK', 'D', 'preset : "!E";', ['0', '1', '1']],
    ['CK', 'D', 'clear : "!E"; preset : "0";', ['0', '0', '0']],
  ])('clocked on %s takes %s %s', (clock, next, more, response) => {
    const circuit = cellCircuit(`${inputs('CK', 'D', 'E')}
      ff ("IQ", "IQN") { clocked_on : "${clock}"; next_state : "${next}"; ${more} }
      ${output('Q', 'IQ')}`);
    expect(play(referenceFor(circuit), ['11', '00', '00'])).toEqual(response);
  });

  it.each([
    ['CK', 'rising'],
    ['!CK', 'falling'],
    ["CK'", 'falling'],
    ['(!CK)', 'falling'],
    ['!CK & !CK', 'rising'],
  ])('clocked on %s captures at the %s edge of its clock net', (clock, edge) => {
    const { registers } = cellCircuit(`${inputs('CK', 'D')}
      ff (IQ, IQN) { clocked_on : "${clock}"; next_state : "D"; } ${output('Q', 'IQ')}`);
    expect(registers.count).toBe(1);
    expect(registers.edge[0]).toBe(edge === 'rising' ? 0 : 1);
  });

  it('drives its output itself, without a buffer', () => {
    const { netCount, registers, outputs } = cellCircuit(`${inputs('CK', 'D')}
      ff (IQ, IQN) { clocked_on : "CK"; next_state : "D"; } ${output('Q', 'IQ')}`);
    expect(netCount).toBe(3);
    expect(registers.output[0]).toBe(outputs[0]!.nets[0]);
  });

  it('may have the names of its outputs', () => {
    const circuit = cellCircuit(`${inputs('CK', 'D')}
      ff (Q, QN) { clocked_on : "CK"; next_state : "D"; } ${output('Q', 'Q')} ${output('QN', 'QN')}`);
    expect(play(referenceFor(circuit), ['1', '0', '0'])).toEqual(['0 1', '1 0', '0 1']);
  });

  it('with a second clock shows what it captured while that is active', () => {
    const circuit = cellCircuit(`${inputs('CK', 'D', 'E')}
      ff (IQ, IQN) { clocked_on : "CK"; clocked_on_also : "E"; next_state : "D"; }
      ${output('Q', 'IQ')}`);
    const rows = ['10', '11', '00', '00', '01'];
    expect(play(referenceFor(circuit), rows)).toEqual(['0', '1', '1', '1', '0']);
  });

  it('with a second clock opposite to the first is like one without at the end of a cycle', () => {
    const circuit = cellCircuit(`${inputs('CK', 'D', 'R', 'S')}
      ff (IQ, IQN) { clocked_on : "CK"; clocked_on_also : "!CK"; next_state : "D"; clear : "R";
        preset : "S"; clear_preset_var1 : N; }
      ff (JQ, JQN) { clocked_on : "CK"; next_state : "D"; clear : "R"; preset : "S";
        clear_preset_var1 : N; }
      ${output('Q', 'IQ ^ JQ')}`);
    fc.assert(
      fc.property(rowsOf(3), (rows) => {
        const response = play(
          referenceFor(circuit),
          rows.map((row) => row.join('')),
        );
        expect(new Set(response)).toEqual(new Set(['0']));
      }),
      { seed: 20260104, numRuns: 50 },
    );
  });
});

describe('a latch', () => {
  it.each(bothValues.flatMap((var1) => bothValues.map((var2) => [var1, var2] as const)))(
    'with clear_preset_var1 %s and clear_preset_var2 %s does what they say',
    (var1, var2) => {
      const circuit = cellCircuit(`${inputs('E', 'D', 'R', 'S')}
        latch (IQ, IQN) { enable : "!E"; data_in : "D"; clear : "R"; preset : "S";
          ${both(var1, var2)} }
        ${output('Q', 'IQ')} ${output('QN', 'IQN')}`);
      fc.assert(
        fc.property(rowsOf(4), fc.boolean(), (rows, threeValued) => {
          const model = new Model(var1, var2, threeValued);
          const expected = rows.map(([enable, data, clear, preset]) => {
            if (model.settle(clear!, preset!) && enable === 0) model.state = data!;
            return model.shown(clear!, preset!);
          });
          const texts = rows.map((row) => row.join(''));
          expect(play(referenceFor(circuit, threeValued), texts)).toEqual(expected);
        }),
        { seed: 20260105, numRuns: 30 },
      );
    },
  );

  it('may be of clear and preset alone', () => {
    const circuit = cellCircuit(`${inputs('R', 'S')}
      latch (IQ, IQN) { clear : "R"; preset : "S"; clear_preset_var1 : H; } ${output('Q', 'IQ')}`);
    const rows = ['01', '00', '10', '00', '11', '00'];
    expect(play(referenceFor(circuit), rows)).toEqual(['1', '1', '0', '0', '1', '1']);
  });

  it('gates a clock with a function beside it', () => {
    const circuit = cellCircuit(`clock_gating_integrated_cell : "latch_posedge_precontrol";
      ${inputs('CK', 'E', 'SE', 'D')}
      latch (IQ, IQN) { enable : "!CK"; data_in : "E | SE"; }
      pin (G) { direction : internal; function : "CK & IQ"; }
      ff (FQ, FQN) { clocked_on : "G"; next_state : "D"; }
      ${output('Q', 'FQ')}`);
    const rows = ['101', '000', '100', '011', '000', '000'];
    expect(play(referenceFor(circuit), rows)).toEqual(['0', '1', '1', '0', '1', '1']);
  });
});

describe('a clock gate that the library tells by its kind alone', () => {
  const pin = (name: string, part: string): string =>
    `pin (${name}) { direction : ${part === 'out' ? 'output' : 'input'}; clock_gate_${part}_pin : true; }`;
  const behind = (clock: string): string =>
    `ff (FQ, FQN) { clocked_on : "${clock}"; next_state : "D"; } ${output('Q', 'FQ')}`;
  const pins = [pin('CK', 'clock'), pin('E', 'enable'), pin('SE', 'test'), inputs('D')].join(' ');

  it.each([
    ['latch_posedge', 'latch (IQ, IQN) { enable : "!CK"; data_in : "E + SE"; }', 'CK * IQ'],
    [
      'latch_posedge_precontrol',
      'latch (IQ, IQN) { enable : "!CK"; data_in : "E + SE"; }',
      'CK * IQ',
    ],
    [
      'latch_posedge_postcontrol',
      'latch (IQ, IQN) { enable : "!CK"; data_in : "E"; }',
      'CK * (IQ + SE)',
    ],
    [
      'latch_negedge_precontrol_obs',
      'latch (IQ, IQN) { enable : "CK"; data_in : "E + SE"; }',
      "CK + IQ'",
    ],
    [
      'latch_negedge_postcontrol',
      'latch (IQ, IQN) { enable : "CK"; data_in : "E"; }',
      "CK + (IQ + SE)'",
    ],
    ['none_posedge', '', 'CK * (E + SE)'],
    ['none_negedge_control', '', "CK + (E + SE)'"],
  ])('does what %s stands for', (kind, state, passed) => {
    const register = behind(kind.includes('posedge') ? 'G' : '!G');
    const told = cellCircuit(
      `clock_gating_integrated_cell : "${kind}"; ${pins} ${pin('G', 'out')} ${register}`,
    );
    const written = cellCircuit(
      `${inputs('CK', 'E', 'SE', 'D')} ${state} ${output('G', passed)} ${register}`,
    );
    fc.assert(
      fc.property(rowsOf(3), (rows) => {
        const texts = rows.map((row) => row.join(''));
        expect(play(referenceFor(told), texts)).toEqual(play(referenceFor(written), texts));
      }),
      { seed: 71, numRuns: 40 },
    );
  });

  it('is refused where its pins do not say what they are, or the kind is another', () => {
    const [cure] = cellDesign(
      `clock_gating_integrated_cell : "generic"; ${pins} ${pin('G', 'out')}`,
    ).problems;
    expect(cure).toContain(
      'is a clock gate of the kind generic, but the library gives no logic for G',
    );
    const bare = `clock_gating_integrated_cell : "latch_posedge"; ${inputs('CK', 'E')} ${pin('G', 'out')}`;
    expect(cellDesign(bare).problems).toHaveLength(1);
  });

  it('leaves alone what the library writes out', () => {
    const circuit =
      cellCircuit(`clock_gating_integrated_cell : "latch_posedge"; ${pins} ${behind('G')}
      pin (G) { direction : output; function : "CK * E"; clock_gate_out_pin : true; }`);
    expect(circuit.latches.count).toBe(0);
  });
});

describe('a bank', () => {
  const types =
    'type (b) { bit_width : 3; bit_from : 2; bit_to : 0; downto : true; } type (u) { bit_width : 3; }';

  it('of flip-flops takes the same bit of each bus', () => {
    const circuit = cellCircuit(`${types} ${inputs('CK', 'E')}
      bus (D) { bus_type : b; direction : input; }
      ff_bank (IQ, IQN, 3) { clocked_on : "CK"; next_state : "(D & E) | (IQ & !E)"; }
      bus (Q) { bus_type : b; direction : output; function : "IQ"; }
      bus (QN) { bus_type : b; direction : output; function : "IQN"; }`);
    expect(circuit.registers.count).toBe(3);
    expect(play(referenceFor(circuit), ['1 110', '0 001', '1 011', '0 000'])).toEqual([
      '000 111',
      '110 001',
      '110 001',
      '011 100',
    ]);
  });

  it('of latches takes the same member of each bundle', () => {
    const circuit = cellCircuit(`${inputs('G', 'R')}
      bundle (D) { members (D1, D2); direction : input; }
      latch_bank (IQ, IQN, 2) { enable : "G"; data_in : "D"; clear : "R"; }
      bundle (Q) { members (Q1, Q2); direction : output; function : "IQ"; pin (Q2) { function : "IQN"; } }`);
    expect(play(referenceFor(circuit), ['1010', '0001', '1011', '0100'])).toEqual([
      '1 1',
      '1 1',
      '1 0',
      '0 1',
    ]);
  });

  it('has elements with the indices of the bus that names them', () => {
    const circuit = cellCircuit(`${types} ${inputs('CK')}
      bus (D) { bus_type : u; direction : input; }
      ff_bank (IQ, IQN, 3) { clocked_on : "CK"; next_state : "D"; }
      bus (Q) { bus_type : u; direction : output;
        pin (Q[0]) { function : "IQ[0]"; } pin (Q[1]) { function : "IQ[2]"; } pin (Q[2]) { function : "IQN[1]"; } }`);
    expect(play(referenceFor(circuit), ['100', '001', '000'])).toEqual(['001', '101', '011']);
  });

  it('of one bit may be named by a single pin', () => {
    const circuit = cellCircuit(`${inputs('CK', 'D')}
      ff_bank (IQ, IQN, 1) { clocked_on : "CK"; next_state : "D"; } ${output('Q', 'IQ')}`);
    expect(play(referenceFor(circuit), ['1', '0', '0'])).toEqual(['0', '1', '0']);
  });
});

describe('state that makes no sense', () => {
  it.each([
    [
      'ff (IQ, IQN) { clocked_on : "D"; }',
      "syntax-error 4 'ff (IQ, IQN)' flip-flop IQ has no next_state; add it",
    ],
    [
      'ff (IQ, IQN) { next_state : "D"; }',
      "syntax-error 4 'ff (IQ, IQN)' flip-flop IQ has no clocked_on; add it",
    ],
    [
      'latch (IQ, IQN) { enable : "D"; }',
      "syntax-error 4 'latch (IQ, IQN)' latch IQ has no data_in; add it",
    ],
    [
      'latch (IQ, IQN) { data_in : "D"; }',
      "syntax-error 4 'latch (IQ, IQN)' latch IQ has no enable; add it",
    ],
    [
      'ff (IQ, IQN) { clocked_on : "D"; next_state : "D &"; }',
      "syntax-error 4 '' this is no function: expected a pin name, 0, 1 or (",
    ],
    [
      'ff (IQ, IQN) { clocked_on : "C"; next_state : "D"; }',
      "name-undeclared 4 'C' C is no pin or state of cell C",
    ],
    [
      'ff (IQ, IQN) { clocked_on : "D"; next_state : "D"; clear : "C"; }',
      "name-undeclared 4 'C' C is no pin or state of cell C",
    ],
    [
      'ff (IQ, IQN) { clocked_on : "D"; next_state : "D"; clocked_on_also : "C"; }',
      "name-undeclared 4 'C' C is no pin or state of cell C",
    ],
    [
      'latch (IQ, IQN) { enable : "D"; enable_also : "!D"; data_in : "D"; }',
      "not-supported 4 '!D' latch IQ has a second enable, which is not read; give the cell a Verilog model in a file that is named before the library",
    ],
    [
      'ff (IQ, IQ) { clocked_on : "D"; next_state : "D"; }',
      "name-redeclared 4 'ff (IQ, IQ)' state IQ is described twice; remove one of the two",
    ],
    [
      'ff_bank (IQ, IQN, 2) { clocked_on : "D"; next_state : "D"; }',
      "range-invalid 5 'IQ' IQ has 2 bits; name one of them",
    ],
  ])('is reported where its cell is used: %s', (text, problem) => {
    const { problems } = cellDesign(`${inputs('D')}\n${text}\n${output('Q', 'IQ')}`);
    expect(problems).toEqual([problem]);
  });
});
