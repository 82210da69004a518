import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../runtime/layout.js';
import { type Departure, departureText } from '../../../runtime/node/departure.js';
import { ExpectationChecker } from '../../../runtime/node/expectation.js';
import { ResponseTable } from '../../../runtime/node/responseTable.js';
import { packRows } from '../../support/rows.js';
import { bytesOf, layoutOf } from '../../support/tables.js';

const two = layoutOf([], ['y', 'v[7:0]']);
const three = layoutOf([], ['y', 'v[7:0]'], { threeValued: true });

const response = (layout: ModelLayout, firstCycle: number, rows: readonly string[]) => ({
  firstCycle,
  cycles: rows.length,
  rows: packRows(layout, layout.outputs, rows),
});

/** The departures of rows, given two a block, from a table; then the cycle that was not reached. */
async function check(layout: ModelLayout, table: string, rows: readonly string[], most = 99) {
  const checker = await ExpectationChecker.open('e.csv', layout, bytesOf(table, 5));
  const texts: string[] = [];
  for (let at = 0; at < rows.length; at += 2) {
    const found = await checker.check(response(layout, at, rows.slice(at, at + 2)), most);
    texts.push(...found.map(departureText));
  }
  const left = await checker.finish();
  return left === undefined ? texts : [...texts, left];
}

const rows = ['1 00000001', '0 00000010', '1 00000011', '0 00000100', '1 00000101'];

describe('ExpectationChecker', () => {
  it('finds nothing in the table that the response itself makes', async () => {
    const table = new ResponseTable(three);
    const known = ['1 00000001', 'x 0000x010', '0 xxxxxxxx'];
    let text = new TextDecoder().decode(table.header());
    for (const piece of table.rows(response(three, 0, known)))
      text += new TextDecoder().decode(piece);
    expect(await check(three, text, known)).toEqual([]);
  });

  it('tells cycle, port, both values and the place', async () => {
    expect(await check(two, 'cycle,y,v\n0,1,0x01\n1,1,2\n2,1,0x13\n', rows)).toEqual([
      'e.csv:3:3: cycle 1: y is 0, expected 1',
      'e.csv:4:5: cycle 2: v is 0x03, expected 0x13',
    ]);
  });

  it('takes row k as cycle k where there is no cycle column, and any columns', async () => {
    expect(await check(two, 'v\n1\n2\n3\n5\n', rows)).toEqual([
      'e.csv:5:1: cycle 3: v is 0x04, expected 5',
    ]);
    expect(await check(two, '"v[7:2]",v[0],y\n0,1,1\n0,0,0\n1,1,1\n', rows)).toEqual([
      'e.csv:4:1: cycle 2: v[7:2] is 0x00, expected 1',
    ]);
  });

  it('takes sparse cycles in ascending order', async () => {
    expect(await check(two, 'cycle,v\n1,2\n4,6\n', rows)).toEqual([
      'e.csv:3:3: cycle 4: v is 0x05, expected 6',
    ]);
  });

  it('does not care about empty fields, `-`, and digits `-`', async () => {
    const table = 'cycle,y,v\n0,-,0b-------1\n1,,-\n2,1,\n3,-,0b0000----\n4,0,0b----0---\n';
    expect(await check(two, table, rows)).toEqual(['e.csv:6:3: cycle 4: y is 1, expected 0']);
    expect(await check(two, 'v\n0b-------0\n', rows)).toEqual([
      'e.csv:2:1: cycle 0: v is 0x01, expected 0b-------0',
    ]);
  });

  it('matches x with x alone', async () => {
    const known = ['x 0000000x', '0 00000000', 'x 00000000'];
    expect(await check(three, 'y,v\n0,0\nx,0bx\nx,0x00\n', known)).toEqual([
      'e.csv:2:1: cycle 0: y is x, expected 0',
      'e.csv:2:3: cycle 0: v is 0b0000000x, expected 0',
      'e.csv:3:1: cycle 1: y is 0, expected x',
      'e.csv:3:3: cycle 1: v is 0x00, expected 0bx',
    ]);
  });

  it('stops after as many departures as it is asked for', async () => {
    const table = 'y,v\n0,0\n1,0\n';
    const checker = await ExpectationChecker.open('e.csv', two, bytesOf(table));
    const first = await checker.check(response(two, 0, rows));
    expect(first).toEqual<Departure[]>([
      {
        cycle: 0,
        port: 'y',
        expected: '0',
        actual: '1',
        place: 'e.csv:2:1',
      },
    ]);
  });

  it('tells the first cycle that the response did not reach', async () => {
    expect(await check(two, 'cycle,y\n0,1\n7,1\n', rows)).toEqual([7]);
    expect(await check(two, 'cycle,y\n0,1\n', rows)).toEqual([]);
    expect(await check(two, 'y\n1\n0\n1\n0\n1\n0\n', rows)).toEqual([5]);
  });

  it('checks wide ports word by word', async () => {
    const wide = layoutOf([], ['a', 'p[69:0]']);
    const row = `1 1${'0'.repeat(68)}1`;
    expect(await check(wide, `p\n0x200000000000000001\n`, [row])).toEqual([]);
    expect(await check(wide, `p\n1\n`, [row])).toEqual([
      'e.csv:2:1: cycle 0: p is 0x200000000000000001, expected 1',
    ]);
    expect(await check(wide, `p\n0b-${'0'.repeat(68)}-\n`, [row])).toEqual([]);
  });

  it('lets an output port named cycle be the cycle column', async () => {
    const odd = layoutOf([], ['cycle', 'y']);
    expect(await check(odd, 'cycle,y\n0,1\n', ['0 1'])).toEqual([]);
  });
});

describe('an expectation table is refused', () => {
  const cases: [string, string][] = [
    ['', '1:1: the table is empty; its first line names ports'],
    ['cycle,q\n', '1:7: no such port: q; there are y, v[7:0]'],
    ['y,y\n', '1:3: two columns are named y'],
    ['cycle,y\n3,0\n3,1\n', '3:1: cycle 3 comes after cycle 3; cycles must ascend'],
    ['cycle,y\n3,0\n2,1\n', '3:1: cycle 2 comes after cycle 3; cycles must ascend'],
    ['cycle,y\n,0\n', '2:1: cycle is empty: expected a number'],
    ['cycle,y\n-1,0\n', '2:1: cycle is -1: expected a number'],
    ['cycle,y\n0\n', '2:2: the row has 1 field, the header 2'],
    ['y\n2\n', '2:1: y is 2: the value is too large for one bit'],
    ['v\n0x-1\n', '2:1: v is 0x-1: a digit - belongs in 0b…'],
    ['v\n0b-x\n', '2:1: v is 0b-x: x and z need a three-valued run'],
    ['v\n--\n', '2:1: v is --: a value is decimal, 0x… or 0b…'],
  ];

  it.each(cases)('%j', async (text, message) => {
    await expect(check(two, text, Array(6).fill(rows[0]!))).rejects.toMatchObject({
      name: 'TableError',
      message: `e.csv:${message}`,
    });
  });
});
