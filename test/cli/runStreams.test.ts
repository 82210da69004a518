import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { gunzipSync, gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { command, type Outcome, outcomeOf, WorkFolder } from '../support/command.js';
import { accumulator } from './netlists.js';

const folder = new WorkFolder({ 'sum.v': accumulator });

const engine = ['--engine', 'bytecode'];
const run = (...args: string[]): Promise<Outcome> => folder.run('run', 'sum.v', ...args, ...engine);

/** Runs with some bytes on standard input. */
function feed(input: string, ...args: string[]): Promise<Outcome> {
  const started = folder.startFed('run', 'sum.v', ...args, ...engine);
  started.stdin.end(input);
  return outcomeOf(started);
}

const totals = (table: string): number[] =>
  table
    .trimEnd()
    .split('\n')
    .slice(1)
    .map((row) => Number(row.split(',')[1]));

describe('run with standard input and output', () => {
  it('reads the stimulus from one and writes the response to the other, and talks elsewhere', async () => {
    const { status, stdout, stderr } = await feed(
      'step\n5\n6\n',
      '--stimulus',
      '-',
      '--response',
      '-',
    );
    expect(stdout).toBe('cycle,total,even\n0,0x00,1\n1,0x05,0\n');
    expect(stderr).toMatch(/^2 cycles in /);
    expect(status).toBe(0);
  });

  it('answers each row before the next one comes', async () => {
    const args = ['--stimulus', '-', '--response', '-', ...engine];
    const started = folder.startFed('run', 'sum.v', ...args);
    const lines = createInterface({ input: started.stdout })[Symbol.asyncIterator]();
    const seen: string[] = [];
    started.stdin.write('step,clear\n');
    for (const row of ['3,0', '4,0', '9,1', '1,0']) {
      started.stdin.write(`${row}\n`);
      if (seen.length === 0) await lines.next();
      seen.push((await lines.next()).value as string);
    }
    started.stdin.end();
    expect(seen).toEqual(['0,0x00,1', '1,0x03,0', '2,0x07,0', '3,0x00,1']);
    expect(await once(started, 'exit')).toEqual([0, null]);
  });

  it('can be interrupted while it waits for a row, and keeps what it has', async () => {
    const args = ['--stimulus', '-', '--response', 'kept.csv', '--json', ...engine];
    const started = folder.startFed('run', 'sum.v', ...args);
    started.stdin.write('step\n5\n6\n');
    const isThere = () => folder.names().some((name) => name.includes('kept'));
    while (!isThere()) await new Promise((resolve) => setTimeout(resolve, 20));
    started.kill('SIGINT');
    const { status, stdout } = await outcomeOf(started);
    const { stopped } = JSON.parse(stdout) as { stopped: { cycle: number; reason: string } };
    expect(stopped.reason).toBe('interrupted');
    const whole = ['cycle,total,even', '0,0x00,1', '1,0x05,0'];
    const kept = whole.slice(0, stopped.cycle + 1).join('\n');
    expect(folder.read('kept.csv')).toBe(`${kept}\n`);
    expect(status).toBe(1);
  });

  it('is content where nobody reads the response to its end', async () => {
    const args = ['--random', '1', '--cycles', '100_000_000', '--response', '-', ...engine];
    const started = folder.start('run', 'sum.v', ...args);
    const [first] = (await once(started.stdout, 'data')) as [Buffer];
    started.stdout.destroy();
    expect(first.toString()).toMatch(/^cycle,total,even\n/);
    const [status] = await once(started, 'exit');
    expect(status).toBe(0);
  });

  it('is content where nobody reads a table of nets to its end', async () => {
    const args = '--random 1 --cycles 100_000 --table /dev/stdout --engine bytecode';
    const pipe = `"${process.execPath}" "${command}" run sum.v ${args} | head -n 1`;
    const shell = spawn('sh', ['-c', pipe], {
      cwd: folder.path,
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    const { stdout, stderr } = await outcomeOf(shell);
    expect(stdout).toMatch(/^cycle,clk,.*\n$/);
    expect(stderr).toBe('');
  });

  it('still tells whether all was as expected where nobody reads the response', async () => {
    const args = ['--random', '1', '--cycles', '60_000', '--weight', 'clear=1', ...engine];
    folder.write('none.csv', 'cycle,total\n50000,1\n');
    const options = ['--response', '-', '--expect', 'none.csv'];
    const started = folder.start('run', 'sum.v', ...args, ...options);
    await once(started.stdout, 'data');
    started.stdout.destroy();
    let told = '';
    started.stderr.on('data', (text: Buffer) => {
      told += text;
    });
    const [status] = await once(started, 'close');
    expect(told).toMatch(/^none\.csv:2:7: cycle 50000: total is 0x00, expected 1\n/);
    expect(status).toBe(1);
  });

  it('takes other forms than tables by name', async () => {
    const packed = await run('--random', '1', '--cycles', '9', '--response', 'r.rows');
    expect(packed.status).toBe(0);
    const args = ['--random', '1', '--cycles', '9', '--expect', '-', '--expect-form', 'packed'];
    const started = folder.startFed('run', 'sum.v', ...args, ...engine);
    started.stdin.end(readFileSync(join(folder.path, 'r.rows')));
    const { stdout, status } = await outcomeOf(started);
    expect(stdout).toMatch(/\nas expected by -\n$/);
    expect(status).toBe(0);
  });
});

describe('run with files of other forms', () => {
  it('writes packed and compressed responses, and is content with them', async () => {
    const random = ['--random', '4', '--cycles', '3000'];
    await run(...random, '--response', 'r.csv');
    await run(...random, '--response', 'r.csv.gz');
    const compressed = readFileSync(join(folder.path, 'r.csv.gz'));
    expect(gunzipSync(compressed).toString()).toBe(folder.read('r.csv'));
    expect((await run(...random, '--expect', 'r.csv.gz')).stdout).toContain(
      '\nas expected by r.csv.gz\n',
    );
    await run(...random, '--response', 'r.rows.gz');
    const same = await run(...random, '--expect', 'r.rows.gz');
    expect(same.status).toBe(0);
    const other = await run('--random', '5', '--cycles', '3000', '--expect', 'r.rows.gz');
    expect(other.stdout).toMatch(/^r\.rows\.gz: cycle 1: total is 0x.., expected 0x..\n/);
    expect(other.status).toBe(1);
  });

  it('plays compressed tables, recordings and modules', async () => {
    writeFileSync(join(folder.path, 'in.csv.gz'), gzipSync('step,@cycles\n5,3\n'));
    folder.write(
      'rec.vcd',
      '$scope module bench $end $var reg 1 ! clk $end $var reg 4 " step $end $upscope $end\n' +
        '$enddefinitions $end\n#0 0! b101 "\n#5 1!\n#6 0!\n#10 1!\n#11 0!\n#15 1! b1 "\n',
    );
    folder.write(
      'in.mjs',
      'export default function* () { for (let i = 0; i < 3; i++) yield { step: 5 } }',
    );
    for (const name of ['in.csv.gz', 'rec.vcd', 'in.mjs']) {
      const { stdout } = await run('--stimulus', name, '--response', '-');
      expect(totals(stdout)).toEqual([0, 5, 10]);
    }
    const { stdout } = await run('--stimulus', 'rec.vcd', '--json');
    expect(JSON.parse(stdout)).toMatchObject({
      notes: ['rec.vcd has no variable for clear, held at 0'],
    });
  });

  it('replays the waves of another run', async () => {
    const random = ['--random', '6', '--cycles', '500', '--weight', 'clear=0.1'];
    await run(...random, '--response', 'first.csv', '--waveform', 'waves.vcd');
    const { status } = await run('--stimulus', 'waves.vcd', '--response', 'second.csv');
    expect(status).toBe(0);
    expect(folder.read('second.csv')).toBe(folder.read('first.csv'));
  });

  it('lets a module look at the last response', async () => {
    folder.write(
      'full.mjs',
      `export const reacts = true;
      export default function* () {
        for (let total = 0; total < 20;) ({ total } = yield { step: 7 });
        yield { clear: 1, step: 0 };
      }`,
    );
    const { stdout } = await run('--stimulus', 'full.mjs', '--cycles', '7', '--response', '-');
    expect(totals(stdout)).toEqual([0, 7, 14, 21, 28, 0, 0]);
  });

  it('writes the chosen part of a response', async () => {
    folder.write('in.csv', 'step\n0\n0\n1\n2\n0\n3\n');
    const part = ['--ports', 'even,total[1:0]', '--changes'];
    const { stdout } = await run('--stimulus', 'in.csv', '--response', '-', ...part);
    expect(stdout).toBe('cycle,even,total[1:0]\n0,1,0x0\n3,0,0x1\n4,0,0x3\n');
    const every = await run('--stimulus', 'in.csv', '--response', '-', '--every', '4');
    expect(every.stdout).toBe('cycle,total,even\n0,0x00,1\n4,0x03,0\n');
  });

  it('holds and weighs random inputs', async () => {
    const weights = ['--weight', 'step[3]=0', '--weight', 'clear=0', '--hold', '2'];
    const { stdout } = await run('--random', '3', '--cycles', '30', ...weights, '--response', '-');
    const steps = totals(stdout).map((total, i, all) => ((all[i + 1] ?? total) - total) & 255);
    expect(steps.slice(0, -1).every((step, i) => step < 8 && step === steps[i & ~1])).toBe(true);
    expect(new Set(steps).size).toBeGreaterThan(3);
  });
});
