import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { responseTo } from '../sequential/courses.js';
import {
  circuitWithNotes,
  primitiveNetlist,
  TableModel,
  wordsOver,
} from '../support/primitiveTable.js';

// The examples of IEEE 1364-2005, clause 8: multiplexer (8.2), level-sensitive latch (8.3),
// edge-sensitive flip-flop (8.4), set-reset flip-flop (8.5) and JK flip-flop (8.7); tables and
// numbers of clauses from memory.
const multiplexer = '0 1 ? : 1; 0 0 ? : 0; 1 ? 1 : 1; 1 ? 0 : 0; x 0 0 : 0; x 1 1 : 1;';
const examples = {
  latch: '0 1 : ? : 1; 0 0 : ? : 0; 1 ? : ? : -;',
  d_edge_ff: `(01) 0 : ? : 0; (01) 1 : ? : 1; (0?) 1 : 1 : 1; (0?) 0 : 0 : 0;
    (?0) ? : ? : -; ? (??) : ? : -;`,
  srff: '1 0 : ? : 1; f 0 : 1 : -; 0 r : ? : 0; 0 f : 0 : -; 1 1 : ? : 0;',
  jk_edge_ff: `? ? ? 0 1 : ? : 1; ? ? ? * 1 : 1 : 1; ? ? ? 1 0 : ? : 0; ? ? ? 1 * : 0 : 0;
    r 0 0 0 0 : 0 : 1; r 0 0 1 1 : ? : -; r 0 1 1 1 : ? : 0; r 1 0 1 1 : ? : 1;
    r 1 1 1 1 : 0 : 1; r 1 1 1 1 : 1 : 0; f ? ? ? ? : ? : -; b * ? ? ? : ? : -;
    b ? * ? ? : ? : -;`,
} as const;

/** Rows in which one input at a time changes to another value of an alphabet. */
function walk(width: number, alphabet: string, seed: number): string[] {
  const random = new RandomBits(seed);
  const rows = ['0'.repeat(width)];
  for (let i = 0; i < 1000; i++) {
    const row = [...rows[i]!];
    // Nothing of a jk_edge_ff gets known while both of its last inputs are 0.
    const input = random.next() % width;
    const values = [...alphabet].filter((value) => value !== row[input]);
    row[input] = values[random.next() % values.length]!;
    rows.push(row.join(''));
  }
  return rows;
}

/** The course of the output over rows, from its value in the first one. */
function courseBy(model: TableModel, rows: readonly string[], first: string): string[] {
  let state = first;
  return rows.map((row, i) => {
    if (i > 0) state = model.next(rows[i - 1]!, row, state);
    return state;
  });
}

const count = (rows: readonly string[], value: string): number =>
  rows.filter((row) => row === value).length;

describe('user-defined primitives with unknown inputs', () => {
  it('follow the table of the multiplexer', async () => {
    const circuit = circuitWithNotes(primitiveNetlist(multiplexer, 3, false));
    const model = new TableModel(multiplexer, false);
    const rows = wordsOver('01x', 3);
    const expected = rows.map((row) => model.level(row));
    expect(await responseTo(circuit, rows, { threeValued: true })).toEqual(expected);
  });

  it.each(Object.entries(examples))('follow the table of %s', async (_, table) => {
    const model = new TableModel(table, true);
    const circuit = circuitWithNotes(primitiveNetlist(table, model.inputs, true));
    // Without a clock of its own the circuit sees every input as data.
    const options = { threeValued: true, clocks: [] };
    for (const alphabet of ['01', '01x']) {
      const rows = walk(model.inputs, alphabet, 8);
      const response = await responseTo(circuit, rows, options);
      const expected = courseBy(model, rows, response[0]!);
      expect(response).toEqual(expected);
      if (alphabet === '01x')
        for (const value of '01x') expect(count(expected, value)).toBeGreaterThan(20);
    }
  });

  it('let the JK flip-flop set, hold, toggle and clear, and its preset and clear win', async () => {
    const circuit = circuitWithNotes(primitiveNetlist(examples.jk_edge_ff, 5, true));
    // j k preset clear; what q is before the rising edge of the cycle
    const course = [
      ['0010', '0'], // cleared
      ['1011', '0'], // sets
      ['0011', '1'], // holds
      ['1111', '1'], // toggles
      ['1111', '0'],
      ['0111', '1'], // clears
      ['0011', '0'],
      ['0001', '1'], // preset
      ['0101', '1'], // whatever j and k
      ['0011', '1'], // a change of preset alone leaves it set
      ['1010', '0'], // clear
      ['0011', '0'], // a change of clear alone leaves it clear
    ] as const;
    const rows = course.map(([row]) => row);
    const expected = course.map(([, q]) => q);
    for (const threeValued of [false, true]) {
      expect(await responseTo(circuit, rows, { threeValued })).toEqual(expected);
    }
  });
});
