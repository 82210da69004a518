import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { WorkFolder } from '../support/command.js';
import { accumulator } from './netlists.js';

const folder = new WorkFolder({
  'sum.v': accumulator,
  'free.v': `
    module free (clk, n); input clk; output [1:0] n; reg [1:0] n = 2'd3;
      always @(posedge clk) n <= n - 2'd1;
    endmodule`,
});

/** Runs on an engine that starts quickly; returns the rows of the response without its header. */
async function responseOf(...args: string[]): Promise<string[]> {
  const response = ['--response', 'out.csv', '--engine', 'bytecode'];
  const { status, stderr } = await folder.run('run', ...args, ...response);
  expect(stderr).toBe('');
  expect(status).toBe(0);
  return folder.read('out.csv').trimEnd().split('\n').slice(1);
}

const totals = (rows: readonly string[]): number[] => rows.map((row) => Number(row.split(',')[1]));

describe('run', () => {
  it('plays a stimulus table and writes the response', async () => {
    folder.write('in.csv', 'step,clear\n5,0\n,\n0x3,\n0b1010,1\r\n"15",0\n');
    await responseOf('sum.v', '--stimulus', 'in.csv');
    expect(folder.read('out.csv')).toBe(
      'cycle,total,even\n0,0x00,1\n1,0x05,0\n2,0x0a,1\n3,0x0d,0\n4,0x00,1\n',
    );
  });

  it('lets a row last as long as its column @cycles says', async () => {
    folder.write('in.csv', '@cycles,step\n3,1\n,10\n2,0\n');
    expect(totals(await responseOf('sum.v', '--stimulus', 'in.csv'))).toEqual([0, 1, 2, 3, 13, 13]);
  });

  it('takes columns that are parts of a port', async () => {
    folder.write('in.csv', 'step[3:2],step[0]\n2,1\n0,\n');
    expect(totals(await responseOf('sum.v', '--stimulus', 'in.csv', '--cycles', '3'))).toEqual([
      0, 9, 10,
    ]);
  });

  it('cuts the stimulus to --cycles, or holds its last row until then', async () => {
    folder.write('in.csv', 'step\n1\n2\n');
    const length = (cycles: string) =>
      responseOf('sum.v', '--stimulus', 'in.csv', '--cycles', cycles);
    expect(totals(await length('1'))).toEqual([0]);
    expect(totals(await length('5'))).toEqual([0, 1, 3, 5, 7]);
  });

  it('gives every input a fresh random bit, those of the documented generator', async () => {
    // xoshiro128++ as `RandomBits` documents it: a word a cycle, first input in the lowest bits.
    const random = new RandomBits(11);
    let total = 0;
    const expected = Array.from({ length: 500 }, () => {
      const before = total;
      const word = random.next();
      total = word & 1 ? 0 : (total + ((word >>> 1) & 15)) & 255;
      return before;
    });
    const rows = await responseOf('sum.v', '--random', '11', '--cycles', '500');
    expect(totals(rows)).toEqual(expected);
  });

  it('needs neither a stimulus nor --random where the netlist has no data input', async () => {
    expect(await responseOf('free.v', '--cycles', '5')).toEqual([
      ...['0,0x3', '1,0x2', '2,0x1', '3,0x0', '4,0x3'],
    ]);
  });

  it('says so where it holds all inputs at 0', async () => {
    const { status, stdout } = await folder.run('run', 'sum.v', '--cycles', '3', '--json');
    expect(status).toBe(0);
    const { notes } = JSON.parse(stdout) as { notes: string[] };
    expect(notes).toEqual([expect.stringContaining('held at 0')]);
  });

  it('replaces a response file, and leaves nothing else behind', async () => {
    folder.write('out.csv', 'from before\n');
    const before = folder.names();
    await responseOf('sum.v', '--random', '1', '--cycles', '2');
    expect(folder.read('out.csv')).toMatch(/^cycle,total,even\n0,0x00,1\n1,0x..,[01]\n$/);
    expect(folder.names()).toEqual(before);
  });

  it('sums the run up in a line, or as JSON', async () => {
    const args = ['run', 'sum.v', '--random', '1', '--cycles', '20_000', '--engine', 'bytecode'];
    const inWords = await folder.run(...args);
    expect(inWords.stdout).toMatch(
      /^20,000 cycles in \d+\.\d\d s, .* cycles\/s \(engine bytecode, power-up zero\)\n$/,
    );
    const { stdout } = await folder.run(...args, '--json');
    const summary = JSON.parse(stdout) as Record<string, unknown>;
    expect(Object.keys(summary)).toEqual([
      ...['cycles', 'seconds', 'cyclesPerSecond', 'engine', 'powerUp', 'notes'],
    ]);
    expect(summary).toMatchObject({ cycles: 20_000, engine: 'bytecode', powerUp: 'zero' });
    const { seconds, cyclesPerSecond } = summary as { seconds: number; cyclesPerSecond: number };
    expect(cyclesPerSecond * seconds).toBeCloseTo(20_000);
  });
});
