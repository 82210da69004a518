import { describe, expect, it } from 'vitest';
import { engineNames } from '../../compiler/engines.js';
import { WorkFolder } from '../support/command.js';
import { accumulator, chain } from './netlists.js';

const folder = new WorkFolder({
  'sum.v': accumulator,
  'chain.bench': chain,
  'ring.bench': chain.replace('DFF(d)', 'DFF(n)\nn = XOR(q15, d)'),
});

interface Summary {
  readonly engine: string;
  readonly powerUp: string;
  readonly signature: string;
  readonly unknownRegisters?: readonly string[];
}

async function run(...args: string[]): Promise<{ summary: Summary; rows: string[] }> {
  const wanted = ['--signature', '--json', '--response', 'out.csv'];
  const { status, stdout } = await folder.run('run', ...args, ...wanted);
  expect(status).toBe(0);
  const rows = folder.read('out.csv').trimEnd().split('\n').slice(1);
  return { summary: JSON.parse(stdout) as Summary, rows };
}

/**
 * CRC-64 of ECMA-182 (1992), annex B, bit by bit: polynomial 42f0e1eba9ea3693 (value from memory),
 * highest power first, initial value 0.
 */
function crc64(bytes: Iterable<number>): string {
  let remainder = 0n;
  for (const byte of bytes) {
    remainder ^= BigInt(byte) << 56n;
    for (let bit = 0; bit < 8; bit++) {
      const isOut = remainder >> 63n;
      remainder = BigInt.asUintN(64, remainder << 1n) ^ (isOut ? 0x42f0e1eba9ea3693n : 0n);
    }
  }
  return remainder.toString(16).padStart(16, '0');
}

describe('the engines', () => {
  it('give the same response and signature, which is the CRC-64 of the packed response', async () => {
    const runs = [];
    for (const name of engineNames) {
      runs.push(await run('sum.v', '--random', '4', '--cycles', '3000', '--engine', name));
    }
    expect(runs.map(({ summary }) => summary.engine)).toEqual(engineNames);
    // Two bytes a cycle: the total, and the bit `even` after it.
    const bytes = runs[0]!.rows.flatMap((row) => row.split(',').slice(1).map(Number));
    for (const { rows, summary } of runs) {
      expect(rows).toEqual(runs[0]!.rows);
      expect(summary.signature).toBe(crc64(bytes));
    }
  });

  it('agree on three values, of which the signature tells x by a second byte', async () => {
    const runs = [];
    for (const name of engineNames) {
      const args = ['chain.bench', '--random', '4', '--cycles', '20', '--power-up', 'unknown'];
      runs.push(await run(...args, '--engine', name));
    }
    const { rows } = runs[0]!;
    expect(rows.slice(0, 2)).toEqual(['0,x,x', '1,x,x']);
    expect(rows.slice(14, 17)).toEqual([
      '14,x,x',
      expect.stringMatching(/^15,[01],x$/),
      expect.stringMatching(/^16,[01],[01]$/),
    ]);
    const bytes = rows.flatMap((row) => {
      const values = row.split(',').slice(1);
      const byteOf = (digit: string) =>
        values.reduce((b, v, i) => b | (Number(v === digit) << i), 0);
      return [byteOf('1'), byteOf('x')];
    });
    for (const { rows: others, summary } of runs) {
      expect(others).toEqual(rows);
      expect(summary.signature).toBe(crc64(bytes));
      expect(summary.unknownRegisters).toEqual([]);
    }
  });
});

describe('power-up', () => {
  // The last stage shows the starting value of every stage, one after another.
  const starts = async (...args: string[]) => {
    const { rows } = await run('chain.bench', '--cycles', '16', '--engine', 'bytecode', ...args);
    return rows.map((row) => row.at(-1)).join('');
  };

  it('starts registers at zero, with a warning that counts them, unless told otherwise', async () => {
    expect(await starts()).toBe('0'.repeat(16));
    const args = ['run', 'ring.bench', '--cycles', '1', '--engine', 'bytecode'];
    const { stderr } = await folder.run(...args);
    expect(stderr).toMatch(/^warning: 16 of 16 registers .*\[register-no-start\]\n$/);
    const chosen = await folder.run(...args, '--power-up', 'zero');
    expect(chosen.stderr).toBe('');
  });

  it('starts them at one', async () => {
    expect(await starts('--power-up', 'one')).toBe('1'.repeat(16));
  });

  it('starts them at random bits that --seed chooses', async () => {
    const first = await starts('--power-up', 'random', '--seed', '1');
    expect(first).toMatch(/^(?=.*0)(?=.*1)[01]{16}$/);
    expect(await starts('--power-up', 'random', '--seed', '0x1')).toBe(first);
    expect(await starts('--power-up', 'random', '--seed', '2')).not.toBe(first);
    const usual = await starts('--power-up', 'random');
    expect(await starts('--power-up', 'random', '--seed', '0')).toBe(usual);
  });

  it('lists the registers that are still unknown after the run', async () => {
    const args = ['chain.bench', '--cycles', '14', '--engine', 'bytecode'];
    const { summary } = await run(...args, '--power-up', 'unknown');
    expect(summary).toMatchObject({ powerUp: 'unknown', unknownRegisters: ['q14', 'q15'] });
  });

  it('leaves the values that the netlist gives', async () => {
    const args = ['sum.v', '--cycles', '1', '--engine', 'bytecode'];
    for (const how of ['one', 'unknown']) {
      const { rows } = await run(...args, '--power-up', how);
      expect(rows).toEqual(['0,0x00,1']);
    }
  });
});
