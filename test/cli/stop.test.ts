import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import { outcomeOf, WorkFolder } from '../support/command.js';

const textOf = (name: string, parameters: Record<string, number> = {}): string =>
  [...circuits.find((circuit) => circuit.name === name)!.write(parameters)].join('');

const folder = new WorkFolder({
  'prbs.v': textOf('prbs', { order: 9 }),
  'box.v': `
    module box (input clk, input [7:0] in, output [3:0] n);
      store u (.clk(clk), .in(in), .n(n));
    endmodule
    module store (input clk, input [7:0] in, output reg [3:0] n);
      reg [15:0] ram [0:31];
      initial n = 0;
      always @(posedge clk) begin n <= n + 4'd1; ram[in[4:0]] <= ram[in[4:0]] + {8'd0, in}; end
    endmodule`,
});

/** The states of the generator, from the all-ones state on, found by stepping ITU-T O.150. */
function statesOf(wanted: (state: number) => boolean, cycles: number): number[] {
  const found: number[] = [];
  for (let state = 0x1ff, cycle = 0; cycle < cycles; cycle++) {
    if (wanted(state)) found.push(cycle);
    const feedback = ((state >>> 8) ^ (state >>> 4)) & 1;
    state = ((state << 1) | feedback) & 0x1ff;
  }
  return found;
}

const summaryOf = (stdout: string) =>
  JSON.parse(stdout) as {
    cycles: number;
    signature?: string;
    stopped?: { cycle: number; reason: string; condition?: string };
    notes: string[];
  };

describe('run --stop-when', () => {
  it('ends with the cycle in which the condition holds, and says how to look around', async () => {
    const [first] = statesOf((state) => state === 5, 511);
    folder.write('low.csv', 'cycle,state\n0,0x1ff\n');
    const args = ['prbs.v', '--stop-when', 'state == 5', '--response', 'seen.csv'];
    args.push('--states', 'state[1:0]', 'serial', '--expect', 'low.csv', '--all');
    const { status, stdout, stderr } = await folder.run('run', ...args);
    expect(stderr).toBe('');
    expect(status).toBe(1);
    expect(stdout).toContain(`stopped at cycle ${first}: state == 5 holds`);
    const rows = folder.read('seen.csv').trimEnd().split('\n');
    expect(rows.length).toBe(first! + 2);
    expect(rows.at(-1)).toMatch(/,0x005$/);
    const [, again] = /look around with: clockstride (.*)/.exec(stdout)!;
    expect(again).toBe(
      `run prbs.v --cycles ${first! + 21} --from ${first! - 20} --to ${first! + 20} ` +
        '--picture stop.svg',
    );
    expect((await folder.run(...again!.split(' '))).status).toBe(0);
    expect(folder.names()).toContain('stop.svg');
  });

  it('counts how often a condition comes to hold, whatever runs the cycles', async () => {
    // Some of them stand side by side: the bit may be 1 for several cycles.
    const all = statesOf((state) => (state & 3) === 3, 2000);
    const begun = all.filter((cycle) => !all.includes(cycle - 1));
    const args = ['prbs.v', '--stop-when', 'state == 0', '--stop-when', '&state[1:0]'];
    for (const engine of ['wasm', 'bytecode', 'reference']) {
      const more = ['--stop-after', '100', '--engine', engine, '--json'];
      const { status, stdout } = await folder.run('run', ...args, ...more);
      const { stopped, cycles } = summaryOf(stdout);
      expect(status).toBe(1);
      expect(stopped).toEqual({
        cycle: begun[99],
        reason: 'occurrence 100 of &state[1:0]',
        condition: '&state[1:0]',
      });
      expect(cycles).toBe(begun[99]! + 1);
    }
  });

  it('sees the words of a memory, and says so where a condition was not met', async () => {
    folder.write('in.csv', 'in,@cycles\n3,10\n4,10\n');
    const args = ['box.v', '--stimulus', 'in.csv', '--power-up', 'zero', '--json'];
    const met = await folder.run('run', ...args, '--stop-when', 'u.ram[3] == 12');
    expect(summaryOf(met.stdout).stopped?.cycle).toBe(4);
    const unmet = await folder.run('run', ...args, '--stop-when', 'u.ram[3] == 13 && u.n');
    expect(unmet.status).toBe(0);
    expect(summaryOf(unmet.stdout).notes).toEqual([
      'u.ram[3] == 13 && u.n never held in 20 cycles',
    ]);
  });

  it('tells that a condition was not met where something else ends the run', async () => {
    const args = ['prbs.v', '--find-period', '--stop-when', 'state == 0', '--json'];
    const { status, stdout } = await folder.run('run', ...args);
    expect(status).toBe(0);
    expect(summaryOf(stdout).notes.at(-1)).toMatch(/^state == 0 never held in \d+ cycles$/);
    // A departure cuts what has been looked at, so nothing is said of it.
    folder.write('wrong.csv', 'cycle,state\n3,0\n');
    const judged = ['prbs.v', '--expect', 'wrong.csv', '--stop-when', 'state == 0', '--json'];
    const departed = await folder.run('run', ...judged);
    expect(departed.status).toBe(1);
    expect(summaryOf(departed.stdout)).toMatchObject({ cycles: 4, notes: [] });
  });

  it('refuses at once what never holds because a clock is inactive', async () => {
    for (const text of ['clk', 'clk && n == 3', '!(u.clk ^ 1) && in[0]']) {
      const { status, stderr } = await folder.run('run', 'box.v', '--stop-when', text);
      expect({ status, stderr }).toEqual({
        status: 2,
        stderr:
          `error: --stop-when: ${text} never holds, for the clock clk is 0 whenever outputs ` +
          'are sampled\n',
      });
    }
    const args = ['run', 'box.v', '--json', '--stop-when', '!clk && (u.clk || n == 3)'];
    expect(summaryOf((await folder.run(...args)).stdout).stopped?.cycle).toBe(3);
  });

  it('refuses what it cannot read, at its place', async () => {
    const { status, stdout, stderr } = await folder.run('run', 'box.v', '--stop-when', 'n == m');
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toBe(
      '--stop-when:1:6: error: there is no net or memory `m` [name-undeclared]\n' +
        '    n == m\n         ^\n',
    );
  });
});

describe('a recorded run with --stop-when', () => {
  it('goes on with its count after an interruption', async () => {
    const begun = statesOf((state) => state === 5, 511).map((cycle) => cycle + 511 * 3_999);
    const args = ['prbs.v', '--stop-when', 'state == 5', '--stop-after', '4000'];
    const started = folder.start('run', ...args, '--engine', 'bytecode', '--record', 'kept');
    const record = join(folder.path, 'kept');
    const isKept = () => existsSync(record) && readdirSync(record).join().includes('checkpoint-');
    while (!isKept() && started.exitCode === null) await setTimeout(5);
    started.kill('SIGINT');
    await outcomeOf(started);
    const { status, stdout } = await folder.run('resume', 'kept', '--json');
    expect(summaryOf(stdout).stopped?.cycle).toBe(begun[0]);
    expect(status).toBe(1);
    expect(summaryOf(stdout).notes.join()).toContain('clockstride revisit kept --from');
  });

  it('goes on past a stop to the next one', async () => {
    const stops = statesOf((state) => (state & 7) === 7, 511).filter(
      (cycle, i, all) => all[i - 1] !== cycle - 1,
    );
    const args = ['prbs.v', '--stop-when', '&state[2:0]', '--stop-after', '3', '--cycles', '300'];
    const first = await folder.run('run', ...args, '--record', 'steps', '--json', '--signature');
    const second = await folder.run('resume', 'steps', '--json');
    expect(second.stderr).toContain(`past its stop at cycle ${stops[2]}`);
    const cycles = [first, second].map(({ stdout }) => summaryOf(stdout).stopped?.cycle);
    expect(cycles).toEqual([stops[2], stops[5]]);
    const whole = await folder.run(
      'run',
      ...args.slice(0, 1),
      '--signature',
      '--json',
      '--cycles',
      `${stops[5]! + 1}`,
    );
    expect(summaryOf(second.stdout).signature).toBe(summaryOf(whole.stdout).signature);
  });

  it('does not say of a condition that it never held where it is gone past', async () => {
    const [first] = statesOf((state) => state === 5, 511);
    const args = ['prbs.v', '--stop-when', 'state == 5', '--cycles', `${first! + 20}`];
    await folder.run('run', ...args, '--record', 'once', '--response', 'once.csv');
    const { status, stdout } = await folder.run('resume', 'once', '--json');
    expect(status).toBe(0);
    expect(summaryOf(stdout).notes).toEqual([
      `state == 5 did not occur after cycle ${first}, in ${first! + 20} cycles`,
    ]);
    await folder.run('run', 'prbs.v', '--cycles', `${first! + 20}`, '--response', 'whole.csv');
    expect(folder.read('once.csv')).toBe(folder.read('whole.csv'));
  });
});
