import { describe, expect, it } from 'vitest';
import { type Outcome, WorkFolder } from '../support/command.js';
import { accumulator } from './netlists.js';

// The same with a gate and a port more, other names inside, and ports in another order.
const rebuilt = `
module rebuilt (clk, step, clear, even, total, odd);
  input clk, clear;
  input [3:0] step;
  output [7:0] total;
  output even, odd;
  reg [7:0] sum = 8'd0;
  assign total = sum;
  always @(posedge clk) if (clear) sum <= 8'd0; else sum <= sum + step;
  buf (odd, total[0]);
  not (even, odd);
endmodule
`;

const model = `
export default () => {
  let sum = 0;
  return ({ cycles, inputs: { clear, step } }) => {
    const total = new Uint8Array(cycles);
    for (let i = 0; i < cycles; i++) {
      total[i] = sum;
      sum = clear[i] ? 0 : sum + step[i];
    }
    return { total, even: total.map((value) => ~value & 1) };
  };
};
`;

const folder = new WorkFolder({
  'sum.v': accumulator,
  'rebuilt.v': rebuilt,
  'late.v': accumulator.replace('total + step', "total + (total == 8'd200 ? 4'd0 : step)"),
  'wide.v': accumulator
    .replace('[3:0]', '[4:0]')
    .replace('even);', 'even, odd);')
    .replace('even;', 'even, odd;'),
  'model.mjs': model,
  'wrong.mjs': model.replace('sum + step[i]', 'sum + (step[i] | 1)'),
});

const random = ['--random', '9', '--weight', 'clear=0.01', '--cycles', '6000'];
const run = (...args: string[]): Promise<Outcome> =>
  folder.run('run', 'sum.v', ...random, '--engine', 'bytecode', ...args);

describe('run --expect-netlist', () => {
  it('is content with a netlist that does the same, and tells in which ports it differs', async () => {
    const { status, stdout, stderr } = await run('--expect-netlist', 'rebuilt.v');
    expect(stderr).toBe('');
    expect(stdout).toContain(
      '\nnote: the netlists differ in their ports: output odd is not in the first\n',
    );
    expect(stdout).toMatch(/\nas expected by rebuilt\.v\n$/);
    expect(status).toBe(0);
  });

  it('ends at the first cycle in which an output differs', async () => {
    const { status, stdout } = await run('--expect-netlist', 'late.v');
    const [, cycle, actual, expected] =
      /^late\.v: cycle (\d+): total is (0x..), expected (0x..)\n/.exec(stdout) ?? [];
    expect(expected).toBe('0xc8');
    expect(Number(actual)).toBeGreaterThan(200);
    expect(stdout).toContain(`\ndeparts from late.v at cycle ${cycle}\n`);
    expect(status).toBe(1);
  });

  it('refuses a netlist with other inputs or widths, and lists all differences', async () => {
    const { status, stderr } = await run('--expect-netlist', 'wide.v', '--response', 'r.csv');
    expect(stderr).toBe(
      'error: --expect-netlist: the netlists differ in their ports: input step has 4 bits in the ' +
        'first, 5 bits in the second; output odd is not in the first\n',
    );
    expect(status).toBe(2);
    expect(folder.names()).not.toContain('r.csv');
  });
});

describe('run --expect-model', () => {
  it('is content where a module computes the same', async () => {
    const { status, stdout } = await run('--expect-model', 'model.mjs');
    expect(stdout).toMatch(/\nas expected by model\.mjs\n$/);
    expect(status).toBe(0);
  });

  it('departs where it computes something else, on which expectation ever comes first', async () => {
    const both = ['--expect-model', 'wrong.mjs', '--expect-netlist', 'late.v', '--json'];
    const { status, stdout } = await run(...both);
    const { mismatch, stopped } = JSON.parse(stdout) as Record<string, Record<string, unknown>>;
    expect(mismatch).toEqual({ cycle: 2, port: 'total', expected: '0x06', actual: '0x05' });
    expect(stopped).toEqual({ cycle: 2, reason: 'departs from the expectation' });
    expect(status).toBe(1);
  });

  it('is refused at its place where it throws', async () => {
    folder.write('bad.mjs', 'export default () =>\n  ({ inputs }) => inputs.stp[0];\n');
    const { status, stderr } = await run('--expect-model', 'bad.mjs');
    expect(stderr).toMatch(/^bad\.mjs:2:\d+: at cycle 0 and after: Cannot read properties/);
    expect(status).toBe(2);
    folder.write('worse.mjs', 'export default () =>\n  ({ inputs };\n');
    const worse = await run('--expect-model', 'worse.mjs');
    expect(worse.stderr).toMatch(/^worse\.mjs:2:14: Unexpected token ';'\n/);
  });
});

describe('run --expect-signature', () => {
  it('compares the signature, and tells both where it is another', async () => {
    const { stdout } = await run('--signature', '--json');
    const { signature } = JSON.parse(stdout) as { signature: string };
    const same = await run('--expect-signature', signature.toUpperCase());
    expect(same.stdout).toContain(`\nsignature ${signature}, as expected\n`);
    expect(same.status).toBe(0);
    const other = await run('--expect-signature', '0x0123456789abcdef');
    expect(other.stdout).toContain(`\nsignature ${signature}, expected 0123456789abcdef\n`);
    expect(other.status).toBe(1);
  });
});
