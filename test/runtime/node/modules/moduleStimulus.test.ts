import { describe, expect, it } from 'vitest';
import type { ModelLayout } from '../../../../runtime/layout.js';
import { moduleStimulus } from '../../../../runtime/node/modules/moduleStimulus.js';
import { moduleFiles } from '../../../support/moduleFiles.js';
import { packRows } from '../../../support/rows.js';
import { rowsOf } from '../../../support/stimulusRows.js';
import { layoutOf } from '../../../support/tables.js';

const file = moduleFiles();
const inputs = ['a', 'v[3:0]', 'w[39:0]'];
const outputs = ['y', 'p[6:0]', 'q[39:0]'];
const two = layoutOf(inputs, outputs, { clocks: ['clk'] });
const three = layoutOf(inputs, outputs, { threeValued: true });
const low = '0'.repeat(39);

const play = async (text: string, layout: ModelLayout = two): Promise<string[]> =>
  rowsOf((await moduleStimulus(file(text), layout)).blocks(), layout);

const steps = (text: string): string => `export default function* (run) { ${text} }`;

/** What goes wrong, without the folder. */
async function refusal(text: string, layout?: ModelLayout): Promise<string> {
  const error = await play(text, layout).then(
    () => new Error('nothing went wrong'),
    (thrown: Error) => thrown,
  );
  return error.message.replace(/^.*\/m\d+\.mjs/, 'm.mjs');
}

describe('a stimulus module', () => {
  it('yields values of ports, which hold until they change', async () => {
    const text = steps(
      "yield { a: 1, v: 5 }; yield { v: '0b1001' }; yield {}; yield; yield { a: false }",
    );
    expect(await play(text)).toEqual([
      `1 0101 0${low}`,
      ...new Array(3).fill(`1 1001 0${low}`),
      `0 1001 0${low}`,
    ]);
  });

  it('yields parts of ports, bigints, and numbers beyond 32 bits', async () => {
    const text = steps("yield { 'v[3:2]': 3n, w: 2 ** 39 }; yield { 'v[0]': true, w: 1n }");
    expect(await play(text)).toEqual([`0 1100 1${low}`, `0 1101 ${low}1`]);
  });

  it('yields x in a three-valued run', async () => {
    expect(await play(steps("yield { a: 'x', v: '0b1x0z' }; yield { v: 1 }"), three)).toEqual([
      `x 1x0x 0${low}`,
      `x 0001 0${low}`,
    ]);
  });

  it('says how long a row lasts', async () => {
    const rows = await play(steps("yield { a: 1, '@cycles': 3 }; yield { a: 0, '@cycles': 40 }"));
    expect(rows.map((row) => row[0]).join('')).toBe(`111${'0'.repeat(40)}`);
  });

  it('yields blocks of packed rows, the last of which holds', async () => {
    const text = steps(
      'yield Uint32Array.of(1, 0, 6, 0); yield { v: 1 }; yield new Uint32Array(0)',
    );
    expect(await play(text)).toEqual([`1 0000 0${low}`, `0 0011 0${low}`, `0 0001 0${low}`]);
  });

  it('may be asynchronous, or give any iterable', async () => {
    const waiting = 'await new Promise((done) => setTimeout(done, 1));';
    const slow = `export default async function* () { yield { a: 1 }; ${waiting} yield { a: 0 } }`;
    expect((await play(slow)).map((row) => row[0])).toEqual(['1', '0']);
    expect(await play('export default () => [{ a: 1 }, { a: 1 }]')).toHaveLength(2);
  });

  it('is told the ports and the shape of a row', async () => {
    const text = steps(`
      const names = (ports) => ports.map(({ name, width }) => name + width).join();
      const told = [names(run.inputs), names(run.outputs), run.threeValued, run.rowWords].join(' ');
      if (told !== 'a1,v4,w40 y1,p7,q40 true 4') throw new Error(told);`);
    expect(await play(text, three)).toEqual([]);
  });

  it('is run step by step and sees the response where it reacts', async () => {
    const text = `export const reacts = true;
      export default function* (run) {
        if (run.response() !== undefined) throw new Error('too early');
        for (let i = 0; i < 3; i++) {
          const seen = yield { v: i };
          const told = JSON.stringify([seen, run.response()], (_, v) => typeof v === 'bigint' ? 'n' + v : v);
          const one = '{"y":' + (i & 1) + ',"p":' + (i + 1) + ',"q":"n' + i + '"}';
          if (told !== '[' + one + ',' + one + ']') throw new Error(told);
        }
      }`;
    const source = await moduleStimulus(file(text), two);
    let cycle = 0;
    for await (const { cycles } of source.blocks()) {
      expect(cycles).toBe(1);
      const row = [
        cycle & 1,
        (cycle + 1).toString(2).padStart(7, '0'),
        cycle.toString(2).padStart(40, '0'),
      ];
      source.see!({ firstCycle: cycle, cycles, rows: packRows(two, two.outputs, [row.join(' ')]) });
      cycle++;
    }
    expect(cycle).toBe(3);
  });

  it('gathers rows where it does not react, and cannot see the response', async () => {
    const source = await moduleStimulus(file(steps('for (;;) yield {}')), two);
    for await (const { cycles } of source.blocks()) {
      expect(cycles).toBe(4096);
      break;
    }
    expect(source.see).toBeUndefined();
    expect(await refusal(steps('run.response()'))).toMatch(
      /^m\.mjs:.*: cycle 0: to see responses, the module needs: export const reacts = true$/,
    );
  });

  it.each([
    ['yield { a: 2 }', 'cycle 0: a is 2: the value is too large for one bit'],
    ['yield {}; yield { v: 16n }', 'cycle 1: v is 16: the value is too large for 4 bits'],
    ['yield { v: -1 }', 'cycle 0: v is -1: a value is a whole number from 0 on'],
    ['yield { v: 0.5 }', 'cycle 0: v is 0.5: a value is a whole number from 0 on'],
    ["yield { v: 'x' }", 'cycle 0: v is x: x and z need a three-valued run'],
    ['yield { v: {} }', 'cycle 0: v is of type object: a value is a whole number'],
    ['yield { q: 1 }', 'cycle 0: no such port: q; there are a, v[3:0], w[39:0]'],
    ['yield { clk: 1 }', 'cycle 0: clk is a clock: it ticks by itself; leave it out'],
    ["yield { '@cycles': 0 }", 'cycle 0: @cycles is 0: a row lasts at least 1 cycle'],
    ['yield 5', 'cycle 0: expected an object with values of ports, got 5'],
    ['yield null', 'cycle 0: expected an object with values of ports, got null'],
    ['yield new Uint32Array(3)', 'cycle 0: rows have 2 words each, got 3 words'],
  ])('is refused with the cycle: %s', async (text, message) => {
    expect(await refusal(steps(text))).toContain(`m.mjs: ${message}`);
  });

  it('that throws is refused at the place', async () => {
    expect(
      await refusal('export default function* () {\n  yield {};\n  throw new Error("oh");\n}'),
    ).toBe('m.mjs:3:9: cycle 1: oh');
    expect(await refusal('const a = 1;\n  null.b;')).toMatch(/^m\.mjs:2:8: Cannot read prop/);
    expect(await refusal('throw "text"')).toBe('m.mjs: text');
  });

  it('that is none is refused', async () => {
    expect(await refusal('export const a = 1;')).toBe(
      'm.mjs: expected a function as default export, got undefined',
    );
    expect(await refusal('export default () => 5')).toBe(
      'm.mjs: the default export must be a generator function',
    );
    await expect(moduleStimulus('/nowhere/m.mjs', two)).rejects.toThrow('ENOENT');
  });
});
