import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../../runtime/layout.js';
import { departureText } from '../../../../runtime/node/departure.js';
import { ModelExpectation } from '../../../../runtime/node/modules/modelExpectation.js';
import { moduleFiles } from '../../../support/moduleFiles.js';
import { packRows } from '../../../support/rows.js';
import { layoutOf } from '../../../support/tables.js';

const file = moduleFiles();
const inputs = ['a', 'v[3:0]', 'w[39:0]', 'u[69:0]'];
const outputs = ['y', 'p[3:0]', 'q[39:0]'];
const two = layoutOf(inputs, outputs);
const three = layoutOf(inputs, outputs, { threeValued: true });
const wide = (value: number) => value.toString(2).padStart(40, '0');
const widest = (value: number) => value.toString(2).padStart(70, '0');

/** Checks rows of inputs and outputs in two blocks; all departures as texts, without the folder. */
async function check(
  text: string,
  rows: readonly (readonly [string, string])[],
  { layout = two, most = Number.POSITIVE_INFINITY }: { layout?: ModelLayout; most?: number } = {},
): Promise<string[]> {
  const checker = await ModelExpectation.open(file(text), layout);
  const texts: string[] = [];
  for (const [from, to] of [
    [0, 2],
    [2, rows.length],
  ] as const) {
    const part = rows.slice(from, to);
    const stimulus = packRows(
      layout,
      layout.inputs,
      part.map(([row]) => row),
    );
    const found = await checker.check(
      {
        firstCycle: from,
        cycles: part.length,
        rows: packRows(
          layout,
          layout.outputs,
          part.map(([, row]) => row),
        ),
        stimulus,
        stimulusStride: stimulus.length / part.length,
      },
      most,
    );
    texts.push(...found.map(departureText));
    if (texts.length >= most) break;
  }
  return texts.map((message) => message.replace(/^.*\/m\d+\.mjs/, 'm.mjs'));
}

const run = [
  [`0 0001 ${wide(7)} ${widest(3)}`, `0 0010 ${wide(7)}`],
  [`1 0010 ${wide(8)} ${widest(4)}`, `1 0011 ${wide(8)}`],
  [`0 1000 ${wide(9)} ${widest(5)}`, `0 1001 ${wide(9)}`],
] as const;

const each = (body: string): string => `
  export default () => ({ firstCycle, cycles, inputs }) => {
    const values = (of) => Array.from({ length: cycles }, (_, i) => of(i, firstCycle + i));
    return ${body};
  }`;

describe('a model module', () => {
  it('computes what is expected of the inputs, in blocks', async () => {
    const text = each(`{
      y: Uint8Array.from(inputs.a),
      p: inputs.v.map((value) => value + 1),
      q: values((i) => inputs.w[i]),
    }`);
    expect(await check(text, run)).toEqual([]);
  });

  it('gives departures by cycle, with both values', async () => {
    const text = each(
      "{ q: values((_, c) => c === 2 ? 1n : null), p: values((_, c) => c && '0b1--1') }",
    );
    expect(await check(text, run)).toEqual([
      'm.mjs: cycle 0: p is 0x2, expected 0x0',
      'm.mjs: cycle 1: p is 0x3, expected 0b1--1',
      'm.mjs: cycle 2: q is 0x0000000009, expected 0x0000000001',
    ]);
  });

  it('gives the earliest alone where one is wanted', async () => {
    const text = each('{ q: [undefined, 0], p: [2, 0], y: [0, 0] }');
    expect(await check(text, run, { most: 1 })).toEqual([
      'm.mjs: cycle 1: q is 0x0000000008, expected 0x0000000000',
    ]);
    expect(await check(each('{ q: [undefined, 0], p: [0, 0] }'), run, { most: 1 })).toEqual([
      'm.mjs: cycle 0: p is 0x2, expected 0x0',
    ]);
  });

  it('sees inputs as numbers, as bigints from 33 bits on, and as texts where they are x', async () => {
    const text = each(`{
      y: values((i, c) => {
        const [a, v, w, u] = [inputs.a, inputs.v, inputs.w, inputs.u].map((of) => of[i]);
        const seen = [typeof v, v, typeof w, w, typeof u, u, a].join(' ');
        const wanted = c === 2 ? 'string 0b1x00 bigint 9 bigint 5 x' :
          ['number', c + 1, 'bigint', c + 7, 'bigint', c + 3, c].join(' ');
        if (seen !== wanted) throw new Error(seen);
      }),
    }`);
    const unknown = [`x 1x00 ${wide(9)} ${widest(5)}`, run[2][1]] as const;
    expect(await check(text, [run[0], run[1], unknown], { layout: three })).toEqual([]);
  });

  it('takes x for x alone in a three-valued run', async () => {
    const unknown = [run[0][0], `x 00x0 ${wide(7)}`] as const;
    const text = each(
      "{ y: values(() => 'x'), p: values((_, c) => c === 0 ? '0b00x-' : '0b--1-') }",
    );
    expect(await check(text, [unknown, unknown], { layout: three })).toEqual([
      'm.mjs: cycle 1: p is 0b00x0, expected 0b--1-',
    ]);
  });

  it('keeps its state between blocks, and may be asynchronous', async () => {
    const text = `export default async () => {
      let calls = 0;
      return async ({ cycles }) => ({ 'p[1:0]': new Array(cycles).fill(calls++ === 0 ? null : 1) });
    }`;
    expect(await check(text, run)).toEqual([]);
  });

  it.each([
    ['{ y: [1] }', 'm.mjs: cycle 0: y needs a value for each of 2 cycles, got 1 values'],
    ['{ y: 1 }', 'm.mjs: cycle 0: y needs a value for each of 2 cycles, got 1'],
    ['{ y: [0, 2] }', 'm.mjs: cycle 1: y is 2: the value is too large for one bit'],
    ['{ p: [2, -1] }', 'm.mjs: cycle 1: p is -1: a value is a whole number from 0 on'],
    ['{ n: [0, 0] }', 'm.mjs: no such port: n; there are y, p[3:0], q[39:0]'],
    ['5', 'm.mjs: cycle 0: expected an object with arrays, got 5'],
    ['(() => { throw new Error("oh") })()', 'at cycle 0 and after: oh'],
  ])('is refused where it gives %s', async (text, message) => {
    const error = await check(each(text), run).catch((thrown: Error) => thrown);
    expect((error as Error).message.replace(/^.*\/m\d+\.mjs/, 'm.mjs')).toContain(message);
  });

  it('is refused where it returns no function', async () => {
    await expect(check('export default () => ({})', run)).rejects.toThrow(
      'the default export must return a function that takes blocks of cycles',
    );
  });
});
