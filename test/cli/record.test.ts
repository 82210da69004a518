import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import { outcomeOf, WorkFolder } from '../support/command.js';
import { accumulator } from './netlists.js';

const textOf = (name: string, parameters: Record<string, number> = {}): string =>
  [...circuits.find((circuit) => circuit.name === name)!.write(parameters)].join('');

const folder = new WorkFolder({
  'lock.v': textOf('lock'),
  'prbs.v': textOf('prbs', { order: 9 }),
  'sum.v': accumulator,
  // Oscillates once the counter comes to five, at the end of cycle 4.
  'ring.v': `
    module ring(input clk, output reg [3:0] n, output w);
      initial n = 0;
      always @(posedge clk) n <= n + 4'd1;
      wire five = n == 4'd5;
      nand (w, five, w);
    endmodule`,
});

const pathOf = (...parts: string[]): string => join(folder.path, ...parts);

/** Long enough to be stopped in the middle, on an engine whose pace is much the same everywhere. */
const LONG = ['lock.v', '--random', '3', '--cycles', '2000000', '--engine', 'bytecode'];

const whole = folder.run('run', ...LONG, '--signature');

const signatureIn = (text: string): string | undefined => /signature (\w+)/.exec(text)?.[1];

/** Waits for a first checkpoint. */
async function checkpointIn(record: string): Promise<void> {
  const isWanted = (name: string): boolean => name.startsWith('checkpoint-');
  while (!existsSync(pathOf(record)) || !readdirSync(pathOf(record)).some(isWanted)) {
    await setTimeout(5);
  }
}

describe('a recorded run', () => {
  it('that is interrupted says how to go on, and comes to the same end', async () => {
    const args = ['--signature', '--response', 'lights.csv', '--every', '1000'];
    const started = folder.start('run', ...LONG, ...args, '--record', 'stopped');
    await checkpointIn('stopped');
    started.kill('SIGINT');
    const stopped = await outcomeOf(started);
    expect(stopped.status).toBe(1);
    expect(stopped.stdout).toContain('interrupted');
    expect(stopped.stdout).toContain('go on with: clockstride resume stopped');
    expect(existsSync(pathOf('lights.csv'))).toBe(false);
    const { status, stdout, stderr } = await folder.run('resume', 'stopped');
    expect(stderr).toMatch(/stopped: goes on at cycle [\d,]+\n/);
    expect(status).toBe(0);
    expect(signatureIn(stdout)).toBe(signatureIn((await whole).stdout));
    const rows = folder.read('lights.csv').trimEnd().split('\n').slice(1);
    expect(rows.map((row) => Number(row.split(',')[0]))).toEqual(
      Array.from({ length: 2000 }, (_, i) => 1000 * i),
    );
    const again = await folder.run('resume', 'stopped');
    expect(again.stdout).toContain('the run was over already');
    expect(signatureIn(again.stdout)).toBe(signatureIn(stdout));
  });

  it('that is killed goes on with what it had', async () => {
    const started = folder.start('run', ...LONG, '--signature', '--record', 'killed');
    await checkpointIn('killed');
    await setTimeout(Math.random() * 100);
    started.kill('SIGKILL');
    expect((await outcomeOf(started)).status).toBeNull();
    const { stdout, stderr } = await folder.run('resume', 'killed');
    expect(stderr).toMatch(/goes on at cycle \d/);
    expect(signatureIn(stdout)).toBe(signatureIn((await whole).stdout));
  });

  it('is not gone on with where an input has changed', async () => {
    folder.write('step.csv', 'step\n1\n2\n');
    const args = ['sum.v', '--stimulus', 'step.csv', '--engine', 'bytecode', '--record', 'sums'];
    expect((await folder.run('run', ...args)).status).toBe(0);
    folder.write('step.csv', 'step\n1\n3\n');
    const { status, stderr } = await folder.run(
      ...['revisit', 'sums', '--from', '0', '--to', '1', '--table', 'sums.csv'],
    );
    expect(status).toBe(2);
    expect(stderr).toContain('error: step.csv: this stimulus has changed since');
    expect(existsSync(pathOf('sums.csv'))).toBe(false);
  });

  it('keeps what stands in its folder', async () => {
    const run = ['run', 'sum.v', '--cycles', '5', '--engine', 'bytecode', '--record'];
    expect((await folder.run(...run, 'twice')).status).toBe(0);
    const twice = await folder.run(...run, 'twice');
    expect(twice.stderr).toContain('twice holds the record of a run already');
    const other = await folder.run(...run, '.');
    expect(other.stderr).toContain('error: --record: . is not empty');
    expect([twice.status, other.status]).toEqual([2, 2]);
  });

  it('leaves no record where the request is wrong', async () => {
    folder.write('bad.csv', 'step\n1\n99\n');
    const run = ['run', 'sum.v', '--engine', 'bytecode', '--record', 'none', '--stimulus'];
    const { status, stderr } = await folder.run(...run, 'bad.csv');
    expect(stderr).toContain('bad.csv:3:1');
    expect(status).toBe(2);
    expect(existsSync(pathOf('none'))).toBe(false);
    const piped = await folder.run(...run, 'bad.csv', '--response', '-');
    expect(piped.stderr).toContain('error: --record needs a plain file for the response');
  });

  it('is refused where its manifest is damaged, and where there is none', async () => {
    const run = ['run', 'sum.v', '--cycles', '5', '--engine', 'bytecode', '--record', 'torn'];
    await folder.run(...run);
    const bytes = readFileSync(pathOf('torn', 'manifest.json'));
    bytes[200]! ^= 4;
    writeFileSync(pathOf('torn', 'manifest.json'), bytes);
    const torn = await folder.run('resume', 'torn');
    expect(torn.stderr).toBe('error: torn/manifest.json: it is not as it was written\n');
    const missing = await folder.run('resume', 'nowhere');
    expect(missing.stderr).toBe('error: there is no folder nowhere\n');
    const empty = await folder.run('resume', '.');
    expect(empty.stderr).toBe('error: . is no record: it has no manifest.json\n');
    expect([torn.status, missing.status, empty.status]).toEqual([2, 2, 2]);
  });
});

describe('revisit', () => {
  it('shows what the run itself would have shown', async () => {
    const run = ['run', 'lock.v', '--random', '8', '--cycles', '3000', '--engine', 'bytecode'];
    const window = ['--from', '1_234', '--to', '1250', '--table'];
    await folder.run(...run, ...window, 'shown.csv');
    await folder.run(...run, '--record', 'seen');
    for (const engine of [[], ['--engine', 'wasm'], ['--engine', 'reference']]) {
      const { status, stdout } = await folder.run(
        'revisit',
        'seen',
        ...window,
        `../${basename(folder.path)}/again.csv`,
        ...engine,
      );
      expect(status).toBe(0);
      // As it was given, though the record is read from the folder of its run.
      expect(stdout.split('\n')[0]).toBe(
        `../${basename(folder.path)}/again.csv: 217 signals of lock`,
      );
      expect(folder.read('again.csv')).toBe(folder.read('shown.csv'));
    }
    expect(folder.read('again.csv').split('\n')).toHaveLength(19);
  });

  it('jumps to cycles far behind a period that is known', async () => {
    const run = ['run', 'prbs.v', '--find-period', '--engine', 'bytecode', '--record', 'rounds'];
    const { stdout, status } = await folder.run(...run);
    expect(stdout).toContain('states repeat every 511 cycles, from cycle 0 on');
    expect(status).toBe(0);
    const nets = ['--nets', 'state', 'serial'];
    const far = 511 * 2_000_000_000 + 77;
    const seen = async (from: number, file: string) => {
      const window = ['--from', `${from}`, '--to', `${from + 9}`];
      const outcome = await folder.run('revisit', 'rounds', ...window, ...nets, '--table', file);
      expect(outcome.stderr).toBe('');
      return folder.read(file).trimEnd().split('\n').slice(1);
    };
    const near = await seen(77, 'near.csv');
    const late = await seen(far, 'late.csv');
    expect(late.map((row) => Number(row.split(',')[0]) - 511 * 2_000_000_000)).toEqual(
      near.map((row) => Number(row.split(',')[0])),
    );
    const values = (rows: string[]) => rows.map((row) => row.slice(row.indexOf(',')));
    expect(values(late)).toEqual(values(near));
  });

  it('shows what it has come to where it is interrupted, and says so', async () => {
    const run = ['run', 'prbs.v', '--find-period', '--engine', 'bytecode', '--record', 'endless'];
    await folder.run(...run);
    const window = ['--from', '0', '--to', '100_000_000', '--nets', 'serial'];
    const started = folder.start('revisit', 'endless', ...window, '--table', 'long.csv');
    const isOpen = () => folder.names().some((name) => name.startsWith('.long.csv.'));
    while (!isOpen() && started.exitCode === null) await setTimeout(5);
    started.kill('SIGINT');
    const { status, stdout } = await outcomeOf(started);
    expect(status).toBe(1);
    expect(stdout).toMatch(/\ninterrupted there\n$/);
    const rows = folder.read('long.csv').trimEnd().split('\n');
    const [, last] = /cycles 0 to ([\d,]+)/.exec(stdout)!;
    expect(rows.at(-1)).toMatch(new RegExp(`^${last!.replaceAll(',', '')},`));
  });

  it('shows what leads to a cycle without result', async () => {
    const ran = await folder.run('run', 'ring.v', '--cycles', '99', '--record', 'rings');
    expect(ran.stderr).toContain('cycle 4 has no result');
    const args = ['--from', '2', '--to', '8', '--nets', 'n', 'five', '--table', 'ring.csv'];
    const { status, stdout } = await folder.run('revisit', 'rings', ...args);
    expect(status).toBe(1);
    expect(stdout).toContain('cycle 4 has no result');
    expect(folder.read('ring.csv')).toBe('cycle,n,five\n2,0x2,0\n3,0x3,0\n');
  });

  it('refuses windows and nets that are not there', async () => {
    await folder.run('run', 'sum.v', '--cycles', '9', '--engine', 'bytecode', '--record', 'few');
    const window = (from: number, to: number, ...more: string[]) =>
      folder.run('revisit', 'few', '--from', `${from}`, '--to', `${to}`, ...more);
    const late = await window(9, 12, '--table', 't.csv');
    expect(late.stderr).toContain('the run has 9 cycles, and its period is not known');
    const turned = await window(5, 4, '--table', 't.csv');
    expect(turned.stderr).toContain('--from 5 comes after --to 4');
    const unknown = await window(1, 4, '--table', 't.csv', '--nets', 'sum.*.q');
    expect(unknown.stderr).toBe('error: --nets sum.*.q: no signal has such a name\n');
    const nowhere = await window(1, 4);
    expect(nowhere.stderr).toContain('say where to: --waveform, --table or --picture FILE');
    const cut = await window(7, 12, '--table', 't.csv');
    expect(cut.stdout).toContain('cycles 7 to 8');
    expect(cut.stdout).toContain('the run ends there');
    expect([late, turned, unknown, nowhere, cut].map(({ status }) => status)).toEqual([
      2, 2, 2, 2, 0,
    ]);
  });
});
