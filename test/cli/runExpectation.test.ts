import { describe, expect, it } from 'vitest';
import { type Outcome, WorkFolder } from '../support/command.js';
import { accumulator } from './netlists.js';

// Totals 0, 5, 10, 15, 20, 25, 30, 35.
const folder = new WorkFolder({ 'sum.v': accumulator, 'five.csv': 'step,@cycles\n5,8\n' });

const compare = (expectation: string, ...args: string[]): Promise<Outcome> => {
  folder.write('want.csv', expectation);
  const fixed = ['run', 'sum.v', '--stimulus', 'five.csv', '--expect', 'want.csv'];
  return folder.run(...fixed, '--engine', 'bytecode', ...args);
};

describe('run --expect', () => {
  it.each([
    ['a whole response', 'cycle,total,even\n0,0x00,1\n1,0x05,0\n2,0x0a,1\n'],
    ['any of the columns, one row a cycle', 'even\n1\n0\n1\n0\n'],
    ['sparse cycles', 'cycle,total\n3,15\n7,0x23\n'],
    ['open fields and digits', 'total,even\n-,1\n,0\n0b0000-0-0,\n0b----11--,-\n'],
    ['parts of ports', 'total[3:0],total[7]\n0,0\n5,0\n10,0\n'],
  ])('is content with %s', async (_, expectation) => {
    const { status, stdout, stderr } = await compare(expectation);
    expect(stderr).toBe('');
    expect(stdout).toMatch(/\nas expected by want\.csv\n$/);
    expect(status).toBe(0);
  });

  it('ends the run at the first departure, and tells the place, the cycle and both values', async () => {
    const { status, stdout } = await compare(
      'cycle,even,total\n1,0,0x05\n3,0,0x10\n4,1,0x15\n',
      ...['--response', 'got.csv'],
    );
    expect(status).toBe(1);
    const lines = stdout.trimEnd().split('\n');
    expect(lines[0]).toBe('want.csv:3:5: cycle 3: total is 0x0f, expected 0x10');
    expect(lines[1]).toMatch(/^4 cycles in /);
    expect(lines.slice(2)).toEqual(['departs from want.csv at cycle 3']);
    expect(folder.read('got.csv')).toBe(
      'cycle,total,even\n0,0x00,1\n1,0x05,0\n2,0x0a,1\n3,0x0f,0\n',
    );
  });

  it('goes on with --all and tells every departure', async () => {
    const { status, stdout } = await compare('total\n0\n6\n10\n0b0000-110\n20\n', '--all');
    expect(status).toBe(1);
    const lines = stdout.trimEnd().split('\n');
    expect(lines.slice(0, 2)).toEqual([
      'want.csv:3:1: cycle 1: total is 0x05, expected 6',
      'want.csv:5:1: cycle 3: total is 0x0f, expected 0b0000-110',
    ]);
    expect(lines[2]).toMatch(/^8 cycles in /);
    expect(lines.slice(3)).toEqual(['2 departures from want.csv, the first at cycle 1']);
  });

  it('puts the departure into the summary with --json, and nothing else on stdout', async () => {
    const { status, stdout } = await compare('total\n0\n6\n', '--json');
    expect(status).toBe(1);
    expect(JSON.parse(stdout)).toMatchObject({
      cycles: 2,
      mismatch: { cycle: 1, port: 'total', expected: '6', actual: '0x05' },
      stopped: { cycle: 1, reason: 'departs from the expectation' },
    });
  });

  it('notes that an expectation goes on after the end of the run', async () => {
    const { status, stdout } = await compare('cycle,total\n7,35\n9,45\n', '--json');
    expect(status).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({ notes: [expect.stringContaining('at cycle 9')] });
  });
});
