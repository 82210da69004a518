import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  circuitWithNotes,
  primitiveNetlist,
  TableModel,
  wordsOver,
} from '../support/primitiveTable.js';
import { responseTo } from './courses.js';
import { expectTable, randomTable, tellsViolations, tiedTogether } from './primitiveTables.js';

/** A random table of two to four inputs, some of them tied and at least one free. */
const tiedTable = (isSequential: boolean): fc.Arbitrary<{ table: string; ties: string }> =>
  fc
    .array(fc.constantFrom('-', '-', '0', '1'), { minLength: 2, maxLength: 4 })
    .map((ties) => ties.join(''))
    .filter((ties) => ties.includes('-') && /[01]/.test(ties) && !/-.*-.*-/.test(ties))
    .chain((ties) => randomTable(ties.length, isSequential).map((table) => ({ table, ties })));

describe('a random table whose inputs are tied to constants in part', () => {
  it('is followed with state, with x', () =>
    fc.assert(
      fc.asyncProperty(tiedTable(true), ({ table, ties }) => expectTable(table, true, ties)),
      { seed: 20260304, numRuns: 20 },
    ));

  it('is followed with state, without x', () =>
    fc.assert(
      fc.asyncProperty(tiedTable(true), ({ table, ties }) => {
        fc.pre(!tellsViolations(table, ties));
        return expectTable(table, false, ties);
      }),
      { seed: 20260305, numRuns: 40 },
    ));

  it.each([true, false])('is followed without state, three values: %s', (threeValued) =>
    fc.assert(
      fc.asyncProperty(tiedTable(false), async ({ table, ties }) => {
        const model = new TableModel(table, false);
        const circuit = circuitWithNotes(primitiveNetlist(table, model.inputs, false, ties));
        const free = [...ties].filter((tie) => tie === '-').length;
        const rows = wordsOver(threeValued ? '01x' : '01', free);
        const expected = rows.map((row) => model.level(tiedTogether(row, ties)));
        expect(await responseTo(circuit, rows, { threeValued })).toEqual(
          expected.map((value) => (threeValued ? value : value.replace('x', '0'))),
        );
      }),
      { seed: 20260306, numRuns: 40 },
    ),
  );
});
