import { spawnSync } from 'node:child_process';
import { once } from 'node:events';
import { closeSync, existsSync, openSync, readFileSync } from 'node:fs';
import { text } from 'node:stream/consumers';
import { describe, expect, inject, it } from 'vitest';
import { command, outcomeOf, WorkFolder } from '../support/command.js';
import { chain } from './netlists.js';

const folder = new WorkFolder({
  'chain.bench': chain,
  'toggle.bench': 'INPUT(d)\nOUTPUT(q)\nq = DFF(n)\nn = XOR(q, d)\n',
});

describe('clockstride', () => {
  it('is built from its sources without complaint', () => {
    expect(inject('buildProblem')).toBe('');
  });

  it.each(['inspect', 'run', 'settle', 'revisit', 'pack', 'bench'])(
    'explains %s with its exit status and an example',
    async (verb) => {
      const { status, stdout, stderr } = await folder.run(verb, '--help');
      expect(stderr).toBe('');
      expect(status).toBe(0);
      expect(stdout).toContain(`Usage: clockstride ${verb} `);
      expect(stdout).toMatch(/^Exit status: 0 /m);
      expect(stdout).toMatch(new RegExp(`^Examples?:\n  clockstride ${verb} `, 'm'));
    },
  );

  it('lists its verbs, and says what its results are no sign of', async () => {
    const { status, stdout } = await folder.run('--help');
    expect(status).toBe(0);
    for (const verb of ['inspect', 'run', 'bench']) expect(stdout).toContain(`\n  ${verb} `);
    expect(stdout.replace(/\s+/g, ' ')).toContain('says nothing about timing and is no sign-off');
  });

  it('takes a call without a verb for a wrong request', async () => {
    const { status, stdout, stderr } = await folder.run();
    expect(status).toBe(2);
    expect(stdout).toBe('');
    expect(stderr).toContain('Usage: clockstride');
  });

  it('has the version of the package', async () => {
    const manifest = new URL('../../package.json', import.meta.url);
    const { version } = JSON.parse(readFileSync(manifest, 'utf8')) as { version: string };
    const { status, stdout } = await folder.run('--version');
    expect([status, stdout]).toEqual([0, `${version}\n`]);
  });

  it('takes a reader that stops reading for no failure', async () => {
    const started = folder.start('inspect', 'chain.bench', '--json');
    started.stdout.destroy();
    const ended = once(started, 'close');
    expect(await text(started.stderr)).toBe('');
    expect(await ended).toEqual([0, null]);
  });

  it.runIf(existsSync('/dev/full'))('says so where its output finds no room', () => {
    const full = openSync('/dev/full', 'w');
    const { status, stderr } = spawnSync(process.execPath, [command, 'inspect', 'chain.bench'], {
      ...{ cwd: folder.path, encoding: 'utf8', stdio: ['ignore', full, 'pipe'] },
    });
    closeSync(full);
    expect(stderr).toMatch(/^error: standard output cannot be used: .+\n$/);
    expect(status).toBe(2);
  });
});

describe('an interrupt', () => {
  it('ends a run early, with a summary and the response up to there', async () => {
    const args = ['run', 'toggle.bench', '--random', '1', '--cycles', '20_000_000'];
    const started = folder.start(
      ...args,
      '--engine',
      'bytecode',
      '--response',
      'out.csv',
      '--json',
    );
    // The warning about the starting values comes when the run is under way.
    started.stderr.once('data', () => started.kill('SIGINT'));
    const { status, stdout } = await outcomeOf(started);
    const { cycles, stopped } = JSON.parse(stdout) as {
      cycles: number;
      stopped: { cycle: number; reason: string };
    };
    expect(stopped).toEqual({ cycle: cycles, reason: 'interrupted' });
    expect(status).toBe(1);
    expect(cycles).toBeGreaterThan(0);
    expect(cycles).toBeLessThan(20_000_000);
    const rows = folder.read('out.csv').trimEnd().split('\n').slice(1);
    expect(rows).toHaveLength(cycles);
    expect(rows.every((row, i) => row.startsWith(`${i},`))).toBe(true);
    expect(folder.names()).toEqual(['chain.bench', 'out.csv', 'toggle.bench']);
  });
});
