import { describe, expect, it } from 'vitest';
import { WorkFolder } from '../support/command.js';

const folder = new WorkFolder({
  'top.v': `
    module top (input clk, input d, output y);
      wire q;
      delay u1 (.clk(clk), .d(d), .q(q));
      not (y, q);
    endmodule
  `,
  'delay.v':
    'module delay (input clk, d, output reg q = 0); always @(posedge clk) q <= d; endmodule',
  'stub.v': 'module delay (input clk, d, output q); assign q = d; endmodule',
  'gates.v': `
    module gates (input a, b, clk, output y, q);
      joint u1 (.a(a), .b(b), .y(y));
      store u2 (.d(y), .ck(clk), .q(q));
    endmodule
  `,
  'cells.lib': `
    library (own) {
      cell (joint) {
        pin (a) { direction : input; }
        pin (b) { direction : input; }
        pin (y) { direction : output; function : "!(a b)"; }
      }
      cell (store) {
        ff (IQ, IQN) { clocked_on : "ck"; next_state : "d"; }
        pin (d) { direction : input; }
        pin (ck) { direction : input; clock : true; }
        pin (q) { direction : output; function : "IQ"; }
      }
    }
  `,
  'two.v': `
    module two (input a, b, d, output reg p = 0, q = 0);
      always @(posedge a) p <= d;
      always @(posedge b) q <= p;
    endmodule
  `,
  'steps.csv': 'd\n1\n0\n1\n1\n0\n0\n',
});

const run = (...args: string[]) => folder.run('run', ...args);

describe('choosing what is read', () => {
  it('takes a module from the file that --replace names, whatever others define', async () => {
    const steps = ['--stimulus', 'steps.csv', '--signature', '--power-up', 'zero'];
    const plain = await run('top.v', 'delay.v', ...steps);
    const replaced = await run('top.v', 'stub.v', '--replace', 'delay=delay.v', ...steps);
    expect(replaced.status).toBe(0);
    const signature = (text: string) => /signature [0-9a-f]{16}/.exec(text)?.[0];
    expect(signature(replaced.stdout)).toBe(signature(plain.stdout));
    const stub = await run('top.v', 'stub.v', '--cycles', '6', '--signature');
    expect(signature(stub.stdout)).not.toBe(signature(plain.stdout));
  });

  it('makes ports of the pins of a module that --black-box names', async () => {
    const { status, stdout } = await folder.run(
      ...['inspect', 'top.v', '--black-box', 'delay', '--json'],
    );
    expect(status).toBe(0);
    const { inputs, outputs } = JSON.parse(stdout);
    const names = (ports: { name: string }[]) => ports.map(({ name }) => name);
    expect(names(inputs)).toEqual(['clk', 'd', 'u1.q']);
    expect(names(outputs)).toEqual(['y', 'u1.clk', 'u1.d']);
  });

  it('reads a cell library in Liberty beside the netlist', async () => {
    folder.write('ab.csv', 'a,b\n1,1\n1,0\n0,1\n1,1\n');
    const { status } = await run(
      'gates.v',
      'cells.lib',
      '--stimulus',
      'ab.csv',
      '--response',
      'r.csv',
    );
    expect(status).toBe(0);
    expect(folder.read('r.csv')).toBe('cycle,y,q\n0,0,0\n1,1,0\n2,1,1\n3,0,1\n');
  });

  it('says how --replace is written', async () => {
    const { status, stderr } = await run('top.v', '--replace', 'delay', '--cycles', '1');
    expect(status).toBe(2);
    expect(stderr).toContain('Give NAME=FILE.');
  });
});

describe('--clock', () => {
  const timed = async (...clocks: string[]) => {
    const outcome = await run('two.v', '--stimulus', 'steps.csv', '--response', 'r.csv', ...clocks);
    expect(outcome.stderr).toBe('');
    expect(outcome.status).toBe(0);
    return folder.read('r.csv').trim().split('\n').slice(1);
  };

  it('lets clocks tick each at its own pace, on every engine', async () => {
    const clocks = ['--clock', 'a=2', '--clock', 'b=4@1'];
    // a at ticks 0 2 4 6 8, b at 1 5 9: p follows d, q takes it in cycles 0, 2 and 4.
    const expected = ['0,0,0', '1,1,1', '2,0,1', '3,1,1', '4,1,1', '5,0,0'];
    for (const engine of ['wasm', 'bytecode', 'reference']) {
      expect(await timed(...clocks, '--engine', engine)).toEqual(expected);
    }
  });

  it('ticks all together unless given', async () => {
    expect(await timed()).toEqual(['0,0,0', '1,1,0', '2,0,1', '3,1,0', '4,1,1', '5,0,1']);
  });

  it.each([
    [['--clock', 'a=2'], 'error: --clock: clock b has no timing; give each clock one\n'],
    [['--clock', 'a=2', '--clock', 'b=1'], 'error: --clock: the period of b must be 2'],
    [['--clock', 'a'], 'Give PORT=PERIOD or PORT=PERIOD@OFFSET'],
  ])('refuses what cannot be run: %s', async (clocks, message) => {
    const { status, stderr } = await run('two.v', '--cycles', '1', ...clocks);
    expect(status).toBe(2);
    expect(stderr).toContain(message);
  });
});
