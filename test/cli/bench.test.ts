import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { CommanderError } from 'commander';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { benchCommand } from '../../compiler/cli/bench.js';
import { InputError } from '../../compiler/diagnostics/diagnostics.js';
import type { BenchSuite } from '../../compiler/report/bench/suite.js';
import type { BenchResult } from '../../compiler/report/benchResult.js';

let folder = '';
const file = (name: string, text: string): string => {
  writeFileSync(join(folder, name), text);
  return join(folder, name);
};

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'clockstride-test-'));
});
afterAll(() => rmSync(folder, { recursive: true }));
afterEach(() => {
  process.exitCode = undefined;
});

/** Runs the verb with very little to measure; returns what it wrote. */
async function bench(...args: string[]): Promise<{ stdout: string; stderr: string }> {
  const written = { stdout: '', stderr: '' };
  const spies = (['stdout', 'stderr'] as const).map((stream) =>
    vi.spyOn(process[stream], 'write').mockImplementation((text) => {
      written[stream] += String(text);
      return true;
    }),
  );
  try {
    const command = benchCommand().exitOverride();
    await command.parseAsync(['--seconds', '0.005', '--native', 'never', ...args], {
      from: 'user',
    });
  } finally {
    for (const spy of spies) spy.mockRestore();
  }
  return written;
}

const hold = 'INPUT(a)\nOUTPUT(q)\nq = DFF(n)\nm = AND(a, q)\nn = OR(m, q)\n';
const toggle = 'INPUT(a)\nOUTPUT(q)\nq = DFF(n)\nn = XOR(a, q)\n';

describe('bench', () => {
  it('prints a table on stdout and nothing on stderr', async () => {
    const { stdout, stderr } = await bench(file('toggle.bench', toggle));
    expect(stdout).toMatch(/^toggle: 1 gates, 1 registers\n\nengine +ns\/cycle .*\nwasm /);
    expect(stdout).toMatch(
      /\nWith each row held for 64 cycles, a cycle of wasm takes [\d.]+ ns\.\n/,
    );
    expect(stderr).toBe('');
    expect(process.exitCode).toBeUndefined();
  });

  it('prints one JSON value where that is asked for', async () => {
    const { stdout } = await bench(file('toggle.bench', toggle), '--json');
    const result = JSON.parse(stdout) as BenchResult;
    expect(result).toMatchObject({ circuit: 'toggle', gates: 1, registers: 1 });
    expect(Object.keys(result.engines)).toEqual(['wasm', 'table', 'bytecode', 'reference']);
  });

  it('takes each netlist as a circuit of its own where that is asked for', async () => {
    const netlists = [file('toggle.bench', toggle), file('hold.bench', hold)];
    const { stdout } = await bench('--each', ...netlists);
    expect(stdout).toMatch(/^circuit +gates .*\ntoggle +1 .*\nhold +2 /);
    const suite = JSON.parse((await bench('--each', ...netlists, '--json')).stdout) as BenchSuite;
    expect(suite.circuits.map(({ circuit }) => circuit)).toEqual(['toggle', 'hold']);
    expect(suite.machine.cores).toBeGreaterThan(0);
    expect(suite.means).toEqual({});
  });

  it('takes several files as one circuit otherwise', async () => {
    const netlists = [file('toggle.bench', toggle), file('hold.bench', hold)];
    await expect(bench(...netlists)).rejects.toThrow(InputError);
  });

  it('refuses a picture where no native C was measured', async () => {
    const netlist = file('toggle.bench', toggle);
    const picture = join(folder, 'speed.svg');
    await expect(bench(netlist, '--picture', picture)).rejects.toThrow(/--picture: .*native C/);
    expect(existsSync(picture)).toBe(false);
  });

  it('gives status 1 and no figures where a cycle has no result', async () => {
    const ring = file('ring.bench', 'INPUT(a)\nOUTPUT(y)\ny = NAND(a, y)\n');
    const { stdout, stderr } = await bench(ring);
    expect(stdout).toBe('');
    expect(stderr).toMatch(/^ring: .*settle/m);
    expect(process.exitCode).toBe(1);
  });

  it('refuses a netlist that cannot be read', async () => {
    await expect(bench(join(folder, 'absent.bench'))).rejects.toThrow(InputError);
  });

  it.each([
    ['--seconds', '0'],
    ['--seconds', 'soon'],
    ['--native', 'perhaps'],
  ])('refuses %s %s', async (option, value) => {
    const netlist = file('toggle.bench', toggle);
    await expect(bench(netlist, option, value)).rejects.toThrow(CommanderError);
  });
});
