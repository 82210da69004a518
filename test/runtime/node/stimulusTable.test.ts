import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../runtime/layout.js';
import { readStimulus } from '../../../runtime/node/stimulusTable.js';
import { unpackRows } from '../../support/rows.js';
import { bytesOf, layoutOf } from '../../support/tables.js';

/** The rows of a table cycle by cycle, ports most significant bit first. */
async function rowsOf(layout: ModelLayout, text: string, pieceLength?: number): Promise<string[]> {
  const rows: string[] = [];
  for await (const block of readStimulus('s.csv', layout, bytesOf(text, pieceLength))) {
    const stride = block.stride || block.rows.length;
    const packed = block.rows.subarray(0, (block.stride ? block.cycles : 1) * stride);
    const unpacked = unpackRows(layout, layout.inputs, packed);
    for (let i = 0; i < block.cycles; i++) rows.push(unpacked[block.stride ? i : 0]!);
  }
  return rows;
}

const refusal = (layout: ModelLayout, text: string) =>
  rowsOf(layout, text).then(
    (rows) => `accepted: ${rows.join('; ')}`,
    (error: Error) => error.message,
  );

const small = layoutOf(['a', 'v[7:0]', 'w[0:3]'], [], { clocks: ['clk', 'bus[2]'] });
const unknown = layoutOf(['a', 'v[7:0]', 'w[0:3]'], [], { threeValued: true });

describe('readStimulus', () => {
  it('reads decimal, hexadecimal and binary values in any column order', async () => {
    expect(await rowsOf(small, 'v,a,w\n255,1,0b1010\n0x0F,0,0XA\n0B11,1,9\n')).toEqual([
      '1 11111111 1010',
      '0 00001111 1010',
      '1 00000011 1001',
    ]);
  });

  it('holds the value of the row before where a field is empty, 0 at first', async () => {
    expect(await rowsOf(small, 'a,v\r\n,7\r\n1,\r\n,\r\n0,1')).toEqual([
      '0 00000111 0000',
      '1 00000111 0000',
      '1 00000111 0000',
      '0 00000001 0000',
    ]);
  });

  it('reads parts of vectors by declared index, whichever way the declaration runs', async () => {
    expect(await rowsOf(small, 'v[7:6],v[0],w[0:1],w[3]\n2,1,0b01,1\n')).toEqual([
      '0 10000001 0101',
    ]);
  });

  it('lets a row last for @cycles cycles, 1 where the field is empty', async () => {
    const rows = await rowsOf(small, 'a,@cycles,v\n1,3,\n0,,1\n1,20,2\n0,5,3\n');
    expect(rows).toEqual([
      ...Array(3).fill('1 00000000 0000'),
      '0 00000001 0000',
      ...Array(20).fill('1 00000010 0000'),
      ...Array(5).fill('0 00000011 0000'),
    ]);
  });

  it('hands out a long row as one held row, whatever its length', async () => {
    const blocks: [number, number][] = [];
    const table = bytesOf('a,@cycles\n1,\n0,9007199254740991\n1,2');
    for await (const { cycles, stride } of readStimulus('s.csv', small, table)) {
      blocks.push([cycles, stride]);
    }
    expect(blocks).toEqual([
      [1, 1],
      [9007199254740991, 0],
      [2, 1],
    ]);
  });

  it('skips blank lines, except in a table of one column', async () => {
    expect(await rowsOf(small, 'a,v\n\n1,1\n\n\n')).toEqual(['1 00000001 0000']);
    expect(await rowsOf(small, 'a\n1\n\n0\n')).toHaveLength(3);
  });

  it('takes quoted names and values, and spaces around both', async () => {
    expect(await rowsOf(small, '"v[7:4]", a \n"0xf", 1 \n')).toEqual(['1 11110000 0000']);
  });

  it('takes the header alone as a stimulus of no cycles', async () => {
    expect(await rowsOf(small, 'a,v\n')).toEqual([]);
  });

  it('works without any input port', async () => {
    expect(await rowsOf(layoutOf([], []), '@cycles\n3\n40\n')).toHaveLength(43);
  });

  it('reads x and z digits in three-valued runs, both as x', async () => {
    const rows = await rowsOf(unknown, 'a,v,w\nx,0b1x0z,0b0\nZ,0xX3,0xz\n0,x,1\n');
    expect(rows).toEqual(['x 00001x0x 0000', 'x xxxx0011 xxxx', '0 xxxxxxxx 0001']);
  });

  it('takes an x digit for the bits that are left at the top', async () => {
    const layout = layoutOf(['p[5:0]'], [], { threeValued: true });
    expect(await rowsOf(layout, 'p\n0xx1\n')).toEqual(['xx0001']);
    expect(await refusal(layout, 'p\n0xx11\n')).toBe(
      's.csv:2:1: p is 0xx11: the value is too large for 6 bits',
    );
  });

  it('reads values of any width in any base', async () => {
    const layout = layoutOf(['a', 'p[69:0]'], []);
    await fc.assert(
      fc.asyncProperty(fc.bigInt({ min: 0n, max: 2n ** 70n - 1n }), async (value) => {
        const table = `p\n${value}\n0x${value.toString(16)}\n0b${value.toString(2)}\n`;
        const row = `0 ${value.toString(2).padStart(70, '0')}`;
        expect(await rowsOf(layout, table)).toEqual([row, row, row]);
      }),
      { seed: 7, numRuns: 50 },
    );
    expect(await rowsOf(layout, `p\n${2n ** 52n}\n`)).toEqual([
      `0 ${(2n ** 52n).toString(2).padStart(70, '0')}`,
    ]);
  });

  it('gives the same rows in pieces of any length and from a file', async () => {
    const lines = Array.from({ length: 5000 }, (_, i) => `${i % 2},0x${(i % 256).toString(16)}`);
    const text = `a,v\n${lines.join('\n')}\n`;
    const whole = await rowsOf(small, text);
    expect(whole).toHaveLength(5000);
    expect(await rowsOf(small, text, 7)).toEqual(whole);
    const folder = mkdtempSync(join(tmpdir(), 'stimulus-'));
    const path = join(folder, 's.csv');
    writeFileSync(path, text);
    let cycles = 0;
    for await (const block of readStimulus(path, small)) cycles += block.cycles;
    rmSync(folder, { recursive: true });
    expect(cycles).toBe(5000);
  });

  it('throws what the file system throws', async () => {
    const missing = join(tmpdir(), 'no-such-folder', 's.csv');
    await expect(readStimulus(missing, small).next()).rejects.toMatchObject({ code: 'ENOENT' });
  });
});

describe('a stimulus table is refused', () => {
  // Table text, then the message.
  const cases: [string, string][] = [
    ['', '1:1: the table is empty; its first line names ports'],
    ['a,q\n', '1:3: no such port: q; there are a, v[7:0], w[0:3]'],
    ['a,\n', '1:3: no such port: (no name); there are a, v[7:0], w[0:3]'],
    ['v,clk\n', '1:3: clk is a clock: it ticks by itself; leave it out'],
    ['bus\n', '1:1: bus[2] is a clock: it ticks by itself; leave it out'],
    ['bus[2]\n', '1:1: bus[2] is a clock: it ticks by itself; leave it out'],
    ['a[0]\n', '1:1: a has one bit and takes no index'],
    ['v[8]\n', '1:1: v[8] is outside v[7:0]'],
    ['v[0:3]\n', '1:1: v[0:3] runs against v[7:0]; swap the two indices'],
    ['w[3:0]\n', '1:1: w[3:0] runs against w[0:3]; swap the two indices'],
    ['v[3:0],a,v[5:2]\n', '1:10: v[5:2] shares bits with column v[3:0]'],
    ['a,v,a\n', '1:5: a shares bits with column a'],
    ['@cycles,@cycles\n', '1:9: two columns are named @cycles'],
    ['a,v\n1\n', '2:2: the row has 1 field, the header 2'],
    ['a,v\n1,2,3\n', '2:5: the row has 3 fields, the header 2'],
    ['a,v\n1,2\n2,0\n', '3:1: a is 2: the value is too large for one bit'],
    ['v\n256\n', '2:1: v is 256: the value is too large for 8 bits'],
    ['v\n0x100\n', '2:1: v is 0x100: the value is too large for 8 bits'],
    ['v\n0b100000000\n', '2:1: v is 0b100000000: the value is too large for 8 bits'],
    [
      'v\n1000000000000000000\n',
      '2:1: v is 1000000000000000000: the value is too large for 8 bits',
    ],
    ['v\n12q\n', '2:1: v is 12q: a value is decimal, 0x… or 0b…'],
    ['v\n-1\n', '2:1: v is -1: a value is decimal, 0x… or 0b…'],
    ['v\n0x\n', '2:1: v is 0x: a value is decimal, 0x… or 0b…'],
    ['v\n0b12\n', '2:1: v is 0b12: a value is decimal, 0x… or 0b…'],
    ['a\n-\n', '2:1: a is -: a value is decimal, 0x… or 0b…'],
    ['a,v\n0,0b1x\n', '2:3: v is 0b1x: x and z need a three-valued run'],
    ['a\nx\n', '2:1: a is x: x and z need a three-valued run'],
    ['a,@cycles\n1,0\n', '2:3: @cycles is 0: a row lasts a whole number of cycles, at least 1'],
    ['a,@cycles\n1,2.5\n', '2:3: @cycles is 2.5: a row lasts a whole number of cycles, at least 1'],
    ['a\n"1\n', '2:1: this quote is never closed'],
  ];

  it.each(cases)('%j', async (text, message) => {
    expect(await refusal(small, text)).toBe(`s.csv:${message}`);
  });

  it('with a bit of a wider part that is a clock', async () => {
    const layout = layoutOf(['bus[3:0]'], [], { clocks: ['bus[2]'] });
    const message = 's.csv:1:1: bus[2] is a clock: it ticks by itself; leave it out';
    expect(await refusal(layout, 'bus\n')).toBe(message);
    expect(await refusal(layout, 'bus[3:1]\n')).toBe(message);
    expect(await refusal(layout, 'bus[1:0]\n1\n')).toBe('accepted: 0001');
  });

  it('with a list of at most twenty ports', async () => {
    const many = layoutOf(
      Array.from({ length: 30 }, (_, i) => `p${i}`),
      [],
    );
    expect(await refusal(many, 'q\n')).toMatch(/p18, p19 and 10 more$/);
    expect(await refusal(layoutOf([], []), 'q\n')).toMatch(/no such port: q; there are none$/);
  });
});
