import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../../runtime/layout.js';
import { departureText } from '../../../../runtime/node/departure.js';
import { PackedExpectation } from '../../../../runtime/node/packed/packedExpectation.js';
import { PackedResponse } from '../../../../runtime/node/packed/packedResponse.js';
import { readPackedStimulus } from '../../../../runtime/node/packed/packedStimulus.js';
import type { ResponseChoice } from '../../../../runtime/node/responseChoice.js';
import type { RunBlock } from '../../../../runtime/stream.js';
import { packRows } from '../../../support/rows.js';
import { rowsOf } from '../../../support/stimulusRows.js';
import { layoutOf } from '../../../support/tables.js';

const ports = ['y', 'v[6:0]', 'w[39:0]'];
const two = layoutOf([], ports);
const three = layoutOf([], ports, { threeValued: true });

const blockOf = (layout: ModelLayout, firstCycle: number, rows: readonly string[]): RunBlock => ({
  firstCycle,
  cycles: rows.length,
  rows: packRows(layout, layout.outputs, rows),
  stimulus: new Uint32Array(0),
  stimulusStride: 0,
});

/** The bytes of a response of some rows, from cycle 0 on. */
function packed(layout: ModelLayout, rows: readonly string[], choice?: ResponseChoice): Uint8Array {
  const response = new PackedResponse(layout, choice);
  const bytes = [...response.header()];
  for (const piece of response.rows(blockOf(layout, 0, rows))) bytes.push(...piece);
  return Uint8Array.from(bytes);
}

function* inPieces(bytes: Uint8Array, length = 1 << 16): Generator<Uint8Array> {
  for (let at = 0; at < bytes.length; at += length) yield bytes.slice(at, at + length);
}

const played = (layout: ModelLayout, bytes: Uint8Array, length?: number): Promise<string[]> =>
  rowsOf(readPackedStimulus('s.rows', layout, inPieces(bytes, length)), layout);

/** The layout in which outputs are inputs. */
const turned = ({ outputs, inputs, ...rest }: ModelLayout): ModelLayout => ({
  ...rest,
  ...{ inputs: outputs, outputs: inputs },
});

const word = (text: string) => text.split(' ').map((byte) => Number.parseInt(byte, 16));

describe('packed rows', () => {
  it('stand in a file byte by byte as documented', () => {
    const layout = layoutOf([], ['a', 'v[8:0]', 'b']);
    const bytes = packed(layout, ['1 100000001 0', '0 000000011 1']);
    expect([...bytes]).toEqual([
      ...word('43 53 2d 52 4f 57 53 0a'), // CS-ROWS and a line feed
      ...word('01 00 00 00 30 00 00 00'), // version 1, no flags, a header of 48 bytes
      ...word('04 00 00 00 03 00 00 00'), // rows of 4 bytes, 3 columns
      ...word('01 00 00 00 01 00 61'), // a
      ...word('09 00 00 00 01 00 76'), // v
      ...word('01 00 00 00 01 00 62 00 00 00'), // b, and what fills the header
      ...word('03 02 00 00'), // 1 + 2 * 0x101
      ...word('06 04 00 00'), // 2 * 0x003 + 2^10
    ]);
  });

  it('have a second group where bits may be x, and their cycle where rows are left out', () => {
    const layout = layoutOf([], ['a', 'v[2:0]'], { threeValued: true });
    const bytes = packed(layout, ['1 0x1', '1 0x1', '0 111'], { changes: true });
    expect([...bytes.slice(10, 12)]).toEqual([3, 0]);
    expect([...bytes.slice(40)]).toEqual([
      ...word('00 00 00 00 00 00 00 00 03 00 00 00 04 00 00 00'),
      ...word('02 00 00 00 00 00 00 00 0e 00 00 00 00 00 00 00'),
    ]);
  });

  const bit = fc.constantFrom('0', '1', 'x');
  const rowOf = (digits: string[]) =>
    `${digits[0]} ${digits.slice(1, 8).join('')} ${digits.slice(8).join('')}`;
  const row = fc.array(bit, { minLength: 48, maxLength: 48 }).map(rowOf);

  it('give the rows back that were written, in pieces of any length', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.array(row, { maxLength: 12 }),
        fc.integer({ min: 1, max: 99 }),
        async (rows, length) => {
          const known = rows.map((text) => text.replaceAll('x', '0'));
          expect(await played(turned(three), packed(three, rows), length)).toEqual(rows);
          expect(await played(turned(two), packed(two, known), length)).toEqual(known);
          expect(await played(turned(three), packed(two, known), length)).toEqual(known);
          expect(await played(turned(two), packed(three, known), length)).toEqual(known);
        },
      ),
      { seed: 3, numRuns: 60 },
    );
  });

  it('hold each row until the next one where they have cycles', async () => {
    const rows = ['0 0000001 0', '0 0000001 0', '1 0000001 1', '1 0000001 1', '0 0000010 0'].map(
      (text) => text.replace(/\d$/, (digit) => digit.padStart(40, '0')),
    );
    const bytes = packed(two, rows, { changes: true });
    expect(await played(turned(two), bytes)).toEqual(rows);
    const every = packed(two, rows, { every: 2 });
    expect(await played(turned(two), every, 7)).toEqual([0, 0, 2, 2, 4].map((i) => rows[i]!));
  });

  it('hold a row for millions of cycles without making them', async () => {
    const layout = layoutOf([], ['a']);
    const response = new PackedResponse(layout, { changes: true });
    const bytes = [...response.header()];
    for (const [cycle, value] of [
      [0, '1'],
      [5e9, '0'],
    ] as const) {
      for (const piece of response.rows(blockOf(layout, cycle, [value]))) bytes.push(...piece);
    }
    const blocks = readPackedStimulus('s.rows', turned(layout), [Uint8Array.from(bytes)]);
    const lengths: number[] = [];
    for await (const { cycles } of blocks) lengths.push(cycles);
    expect(lengths).toEqual([5e9, 1]);
  });

  it('take columns of any choice and order, also parts of ports', async () => {
    const bytes = packed(two, [`1 0101100 ${'1'.repeat(40)}`], { ports: ['v[3:1]', 'y', 'v[6]'] });
    const others = layoutOf(['y', 'v[6:0]', 'z'], []);
    expect(await played(others, bytes)).toEqual(['1 0001100 0']);
  });
});

describe('a response compared with packed rows', () => {
  const check = async (
    layout: ModelLayout,
    bytes: Uint8Array,
    rows: readonly string[],
    most = 1,
  ): Promise<(string | number)[]> => {
    const checker = await PackedExpectation.open('e.rows', layout, inPieces(bytes, 50));
    const found = await checker.check(blockOf(layout, 0, rows.slice(0, 2)), most);
    if (found.length >= most) return found.map(departureText);
    found.push(...(await checker.check(blockOf(layout, 2, rows.slice(2)), most)));
    const unreached = await checker.finish();
    return [...found.map(departureText), ...(unreached === undefined ? [] : [unreached])];
  };
  const wide = '0'.repeat(39);
  const rows = [`0 0000001 ${wide}1`, `1 0000000 ${wide}1`, `0 0000011 ${wide}0`];
  const changed = [rows[0]!, `1 1000000 1${wide}`, rows[2]!];

  it('is as expected where all is the same', async () => {
    expect(await check(two, packed(two, rows), rows)).toEqual([]);
    expect(await check(three, packed(three, rows), rows)).toEqual([]);
    expect(await check(two, packed(two, rows, { every: 2 }), rows)).toEqual([]);
    expect(await check(two, packed(two, rows, { ports: ['y'] }), rows)).toEqual([]);
  });

  it('departs at the first bit of the first cycle that differs', async () => {
    const first = 'e.rows: cycle 1: v is 0x00, expected 0x40';
    expect(await check(two, packed(two, changed), rows)).toEqual([first]);
    expect(await check(two, packed(two, changed), rows, 9)).toEqual([
      first,
      'e.rows: cycle 1: w is 0x0000000001, expected 0x8000000000',
    ]);
    expect(await check(two, packed(two, changed, { changes: true }), rows)).toEqual([first]);
    const part = packed(two, changed, { ports: ['w[39:38]'] });
    expect(await check(two, part, rows)).toEqual([
      'e.rows: cycle 1: w[39:38] is 0x0, expected 0x2',
    ]);
  });

  it('takes x for x alone', async () => {
    const unknown = rows.map((row) => row.replace(/^./, 'x'));
    expect(await check(three, packed(three, unknown), unknown)).toEqual([]);
    expect(await check(three, packed(two, rows), unknown)).toEqual([
      'e.rows: cycle 0: y is x, expected 0',
    ]);
    await expect(check(two, packed(three, unknown), rows)).rejects.toThrow(
      'e.rows: cycle 0 has an x, which needs a three-valued run',
    );
  });

  it('tells the first cycle that was not reached', async () => {
    expect(await check(two, packed(two, [...rows, rows[0]!]), rows)).toEqual([3]);
    const sparse = packed(two, [...rows, rows[2]!, rows[0]!], { changes: true });
    expect(await check(two, sparse, rows)).toEqual([4]);
  });
});

describe('packed rows that are wrong', () => {
  const good = packed(two, [`0 0000001 ${'0'.repeat(40)}`]);
  const with_ = (at: number, byte: number) => good.with(at, byte);
  const inputs = turned(two);

  it.each([
    ['no header', new Uint8Array(0), 'the header of packed rows is cut short'],
    ['half a header', good.slice(0, 30), 'the header of packed rows is cut short'],
    ['a row too short', good.slice(0, -1), 'row 0 is cut short'],
    ['other bytes in front', with_(3, 0x20), 'this is no file of packed rows'],
    ['a table', new TextEncoder().encode('y,v\n1,2\n'), 'this is no file of packed rows'],
    ['a later version', with_(8, 2), 'packed rows of version 2; only 1 can be read'],
    ['flags that mean nothing', with_(10, 4), 'the header of these packed rows contradicts itself'],
    ['rows of another length', with_(16, 4), 'the header of these packed rows contradicts itself'],
    ['more columns than there are', with_(20, 9), 'the header of these packed rows contradicts'],
    ['a name that goes on for ever', with_(29, 9), 'the header of these packed rows contradicts'],
    ['an unknown port', with_(30, 0x71), 'no such port: q; there are y, v[6:0], w[39:0]'],
    ['a port twice', with_(37, 0x79), 'y has 7 bits here and 1 in the circuit'],
  ])('are refused: %s', async (_, bytes, message) => {
    await expect(played(inputs, bytes)).rejects.toThrow(`s.rows: ${message}`);
  });

  it('are refused where an x cannot be', async () => {
    const bytes = packed(three, [`0 0000001 ${'0'.repeat(40)}`, `0 0000001 ${'x'.repeat(40)}`]);
    await expect(played(inputs, bytes)).rejects.toThrow(
      's.rows: row 1 has an x, which needs a three-valued run',
    );
  });

  it('are refused where cycles do not ascend', async () => {
    const bytes = packed(
      two,
      ['0', '1', '0'].map((y) => `${y} 0000001 ${'0'.repeat(40)}`),
      {
        changes: true,
      },
    );
    const last = bytes.length - 16;
    await expect(played(inputs, bytes.with(last, 1))).rejects.toThrow(
      's.rows: cycle 1 comes after cycle 1; cycles must ascend',
    );
  });

  it('are refused where a column is a clock', async () => {
    await expect(played({ ...inputs, clocks: ['y'] }, good)).rejects.toThrow(
      's.rows: y is a clock: it ticks by itself; leave it out',
    );
  });
});
