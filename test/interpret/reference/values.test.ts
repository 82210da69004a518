import { describe, expect, it } from 'vitest';
import { Priority } from '../../../compiler/circuit/circuit.js';
import { GateKind, gateTable } from '../../../compiler/circuit/gates.js';
import { withSetReset } from '../../../compiler/interpret/reference/values.js';
import { play, referenceFor } from '../../support/rows.js';
import { smallCircuit } from '../../support/smallCircuit.js';

const VALUES = ['0', '1', 'x'];

// IEEE 1364-2005, 7.2 (and, nand, or, nor, xor, xnor), 7.3 (buf, not) and 5.1.8 (===); rows are the
// first input, columns the second, both in the order 0, 1, x. Row and column of z equal those of x.
const TWO_INPUT_TABLES: Record<string, string[]> = {
  and: ['000', '01x', '0xx'],
  nand: ['111', '10x', '1xx'],
  or: ['01x', '111', 'x1x'],
  nor: ['10x', '000', 'x0x'],
  xor: ['01x', '10x', 'xxx'],
  xnor: ['10x', '01x', 'xxx'],
  caseEqual: ['100', '010', '001'],
};
const ONE_INPUT_TABLES: Record<string, string> = { buf: '01x', not: '10x' };

const outputsOf = (gate: string, inputs: string[], rows: string[]) =>
  play(referenceFor(smallCircuit({ inputs, outputs: ['y'], gates: { y: gate } }), true), rows);

describe('gates of three values', () => {
  it.each(Object.entries(TWO_INPUT_TABLES))('%s has its table of IEEE 1364', (name, table) => {
    const rows = VALUES.flatMap((a) => VALUES.map((b) => a + b));
    expect(outputsOf(`${name} a b`, ['a', 'b'], rows).join('')).toBe(table.join(''));
  });

  it.each(Object.entries(ONE_INPUT_TABLES))('%s has its table of IEEE 1364', (name, table) => {
    expect(outputsOf(`${name} a`, ['a'], VALUES).join('')).toBe(table);
  });

  it('covers every gate of the kind table', () => {
    const tested = [...Object.keys(TWO_INPUT_TABLES), ...Object.keys(ONE_INPUT_TABLES), 'mux'];
    const gates = Object.values(GateKind).filter((kind) => gateTable[kind].role === 'gate');
    expect(gates.map((kind) => gateTable[kind].name).sort()).toEqual(tested.sort());
  });

  it('folds wide gates from the left, with one inversion at the end', () => {
    const rows = ['000', '111', '1x1', '0x1', '011'];
    expect(outputsOf('nand a b c', ['a', 'b', 'c'], rows).join('')).toBe('10x11');
    expect(outputsOf('xnor a b c', ['a', 'b', 'c'], rows).join('')).toBe('10xx1');
  });

  it('lets a multiplexer with select x keep what both its inputs agree on', () => {
    // IEEE 1364-2005, 5.1.13: the conditional operator merges its operands bit by bit.
    const rows = ['001', '010', '101', '110', 'x00', 'x11', 'x01', 'xxx', '0x1', '10x'];
    expect(outputsOf('mux s a b', ['s', 'a', 'b'], rows).join('')).toBe('01100' + '1xxxx');
  });

  it('reads constants, and a net without driver as x', () => {
    const circuit = smallCircuit({
      inputs: [],
      outputs: ['zero', 'one', 'open'],
      gates: { zero: 'zero', one: 'one' },
    });
    expect(play(referenceFor(circuit, true), [''])).toEqual(['0 1 x']);
    expect(play(referenceFor(circuit), [''])).toEqual(['0 1 0']);
  });
});

describe('withSetReset', () => {
  const table = (priority: number, both: number) =>
    [0, 1, 2].map((set) =>
      [0, 1, 2]
        .map((reset) =>
          [0, 1, 2].map((held) => withSetReset(held, set, reset, priority, both)).join(''),
        )
        .join(' '),
    );

  // Rows are set 0, 1, 2 (x); groups are reset 0, 1, 2; digits are the result for held 0, 1, 2.
  it('lets reset win where the cell says so', () => {
    expect(table(Priority.ResetWins, 2)).toEqual(['012 000 022', '111 000 222', '212 000 222']);
  });

  it('lets set win where the cell says so', () => {
    expect(table(Priority.SetWins, 2)).toEqual(['012 000 022', '111 111 111', '212 222 222']);
  });

  it('gives x, or 0 with two values, where the cell says nothing', () => {
    expect(table(Priority.Unknown, 2)).toEqual(['012 000 022', '111 222 222', '212 222 222']);
    expect(withSetReset(1, 1, 1, Priority.Unknown, 0)).toBe(0);
  });

  it('gives what all possible values of its controls agree on', () => {
    const options = (value: number) => (value === 2 ? [0, 1] : [value]);
    for (const priority of [Priority.ResetWins, Priority.SetWins]) {
      for (let i = 0; i < 27; i++) {
        const [held, set, reset] = [i % 3, Math.floor(i / 3) % 3, Math.floor(i / 9)] as const;
        const results = options(held).flatMap((h) =>
          options(set).flatMap((s) =>
            options(reset).map((r) =>
              priority === Priority.SetWins ? (s ? 1 : r ? 0 : h) : r ? 0 : s ? 1 : h,
            ),
          ),
        );
        const agreed = results.every((value) => value === results[0]) ? results[0] : 2;
        expect(withSetReset(held, set, reset, priority, 2), `${held}${set}${reset}`).toBe(agreed);
      }
    }
  });
});
