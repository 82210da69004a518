import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  circuitWithNotes,
  primitiveNetlist,
  TableModel,
  wordsOver,
} from '../support/primitiveTable.js';
import { responseTo } from './courses.js';
import { expectTable, inputCount, randomTable, tellsViolations } from './primitiveTables.js';

/** Flip-flops and latches, in which two-valued runs need no table. */
const recognized = {
  'a flip-flop': '(01) 0 : ? : 0; (01) 1 : ? : 1; (?0) ? : ? : -; ? (??) : ? : -;',
  'a flip-flop with rows for x':
    'r 0:?:0; r 1:?:1; (0x) 0:0:0; (0x) 1:1:1; (x1) 0:0:0; (x1) 1:1:1; n ?:?:-; ? *:?:-;',
  'a flip-flop that misses edges with x': 'r 0:?:0; r 1:?:1; f ?:?:-; ? *:?:-;',
  'a flip-flop on the falling edge': 'n 0:?:0; n 1:?:1; p ?:?:-; ? *:?:-;',
  'a flip-flop with set and reset':
    '? ? 0 ?:?:0; ? ? 1 0:?:1; p 0 1 ?:?:0; p 1 ? 1:?:1; n ? ? ?:?:-; ? * ? ?:?:-; ? ? p ?:?:-; ? ? ? p:?:-;',
  'a flip-flop with reset that ignores what x may do':
    '? ? 0:?:0; ? ? x:0:0; r 0 1:?:0; r 1 1:?:1; r 0 x:?:0; n ? ?:?:-; ? * ?:?:-; ? ? (?1):?:-;',
  // In the style of many cell libraries, with rows for what can be there before alone.
  'a flip-flop whose reset ends at 0 and whose set ends at 1': `0 r ? 1:?:0; 1 r 1 ?:?:1; 1 * 1 ?:1:1; 0 * ? 1:0:0; ? f ? ?:?:-; * b ? ?:?:-; ? ? ? 0:?:1;
    ? b 1 *:1:1; 1 x 1 *:1:1; ? ? 0 1:?:0; ? b * 1:0:0; 0 x * 1:0:0;`,
  'a flip-flop whose reset ends at 0 and wins':
    '0 r 1:?:0; 1 r 1:?:1; ? ? 0:?:0; ? ? r:0:0; ? n ?:?:-; * ? ?:?:-;',
  'a latch that closes on what it has': `1 0 1 ?:?:1; 0 0 ? 1:?:0; 1 * 1 ?:1:1; 0 * ? 1:0:0; * 1 ? ?:?:-; ? ? ? 0:?:1; ? 1 1 *:1:1;
    1 ? 1 *:1:1; ? ? 0 1:?:0; ? 1 * 1:0:0; 0 ? * 1:0:0;`,
  'a latch that closes on what it has, with a notifier':
    '1 0 ?:?:1; 0 0 ?:?:0; 1 * ?:1:1; 0 * ?:0:0; * 1 ?:?:-; ? ? *:?:x;',
  'a flip-flop with a notifier': 'r 0 ?:?:0; r 1 ?:?:1; n ? ?:?:-; ? * ?:?:-; ? ? *:?:x;',
  'a flip-flop with enable':
    'r 1 0:?:0; r 1 1:?:1; r 0 ?:?:-; r x 0:0:0; r x 1:1:1; n ? ?:?:-; ? * ?:?:-; ? ? *:?:-;',
  'a toggle': 'r 1:0:1; r 1:1:0; r 0:?:-; f ?:?:-; ? *:?:-;',
  'a latch': '1 0:?:0; 1 1:?:1; 0 ?:?:-;',
  'a latch with rows for x': '1 0:?:0; 1 1:?:1; 0 ?:?:-; x 0:0:0; x 1:1:1;',
  'a latch with rows of edges': '1 0:?:0; 1 1:?:1; 0 *:?:-; f ?:?:-;',
  'a latch with reset': '? ? 1:?:0; 0 0 ?:?:0; 0 1 0:?:1; 1 ? 0:?:-; 1 ? x:0:0;',
  'a latch of set and reset': '1 0:?:1; ? 1:?:0; 0 0:?:-;',
  'a latch that both make x': '1 0:?:1; 0 1:?:0; 0 0:?:-; 1 1:?:x;',
} as const;

/** Tables that are neither. */
const others = {
  'a flip-flop on both edges': 'r 0:?:0; r 1:?:1; f 0:?:0; f 1:?:1; ? *:?:-;',
  'a flip-flop with two clocks':
    'r 0 ? ?:?:0; r 1 ? ?:?:1; ? ? r 0:?:0; ? ? r 1:?:1; n ? ? ?:?:-; ? ? n ?:?:-; ? * ? ?:?:-; ? ? ? *:?:-;',
  'a flip-flop without a row for its data': 'r 0:?:0; r 1:?:1; f ?:?:-;',
  'a value that swings': '1 ?:0:1; 1 ?:1:0; 0 ?:?:-;',
  'a value that depends on order': '* 0:?:-; ? r:?:1; 1 1:?:1; 0 n:?:-;',
  'an edge that depends on the level of its input': '1 0:?:0; r 1:?:1; 0 ?:?:-;',
  // Clause 8.5 and clause 8.7; written down from memory.
  srff: '1 0:?:1; f 0:1:-; 0 r:?:0; 0 f:0:-; 1 1:?:0;',
  jk_edge_ff: `? ? ? 0 1:?:1; ? ? ? * 1:1:1; ? ? ? 1 0:?:0; ? ? ? 1 *:0:0; r 0 0 0 0:0:1;
    r 0 0 1 1:?:-; r 0 1 1 1:?:0; r 1 0 1 1:?:1; r 1 1 1 1:0:1; r 1 1 1 1:1:0; f ? ? ? ?:?:-;
    b * ? ? ?:?:-; b ? * ? ?:?:-;`,
} as const;

describe('a primitive with state does what its table says of each change of an input', () => {
  it.each(Object.entries(recognized))('with x, as %s', (_, table) => expectTable(table, true));
  it.each(Object.entries(others))('with x, as %s', (_, table) => expectTable(table, true));
  it.each(Object.entries(others))('without x, as %s', (_, table) => expectTable(table, false));
  it.each(Object.entries(recognized).filter(([name]) => !name.includes('notifier')))(
    'without x, as %s',
    (_, table) => expectTable(table, false),
  );
});

describe('a random table', () => {
  it('with state is followed, with x', () =>
    fc.assert(
      fc.asyncProperty(
        inputCount.chain((inputs) => randomTable(inputs, true)),
        (table) => expectTable(table, true),
      ),
      { seed: 20260301, numRuns: 25 },
    ));

  it('with state is followed, without x', () =>
    fc.assert(
      fc.asyncProperty(
        inputCount.chain((inputs) => randomTable(inputs, true)),
        (table) => {
          fc.pre(!tellsViolations(table));
          return expectTable(table, false);
        },
      ),
      { seed: 20260302, numRuns: 60 },
    ));

  it.each([true, false])('without state is followed, three values: %s', (threeValued) =>
    fc.assert(
      fc.asyncProperty(
        inputCount.chain((inputs) => randomTable(inputs, false)),
        async (table) => {
          const model = new TableModel(table, false);
          const circuit = circuitWithNotes(primitiveNetlist(table, model.inputs, false));
          const rows = wordsOver(threeValued ? '01x' : '01', model.inputs);
          const expected = rows.map((row) => model.level(row));
          expect(await responseTo(circuit, rows, { threeValued })).toEqual(
            expected.map((value) => (threeValued ? value : value.replace('x', '0'))),
          );
        },
      ),
      { seed: 20260303, numRuns: 60 },
    ),
  );
});
