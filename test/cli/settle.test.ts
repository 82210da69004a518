import { describe, expect, it } from 'vitest';
import type { SettleReport } from '../../compiler/settle/settleReport.js';
import { WorkFolder } from '../support/command.js';
import { chain } from './netlists.js';

/** A counter with reset, a register that nothing sets, one that hides from x, and a free ring. */
const block = `
module block (clk, rst, load, d, count, keep, zero);
  input clk, rst, load;
  input [1:0] d;
  output [3:0] count;
  output [1:0] keep;
  output zero;
  reg [3:0] count;
  reg [1:0] keep;
  reg zero;
  always @(posedge clk) begin
    count <= rst ? 4'd0 : count + 4'd1;
    if (load) keep <= d;
    zero <= keep[0] & ~keep[0];
  end
endmodule
`;

const folder = new WorkFolder({
  'block.v': block,
  'chain.bench': chain,
  'reset.csv': 'rst,@cycles\n1,2\n0,3\n',
  'load.csv': 'rst,load,d,@cycles\n1,1,2,2\n0,0,0,3\n',
  'x.csv': 'rst\nx\n',
});

describe('settle', () => {
  it('prints what becomes known, what x hides and what power-up decides', async () => {
    const { status, stdout, stderr } = await folder.run(
      ...['settle', 'block.v', '--stimulus', 'reset.csv'],
    );
    expect(stderr).toBe('');
    expect(status).toBe(1);
    expect(stdout).toMatch(/^known +4 +after at most 1 cycle$/m);
    expect(stdout).toMatch(/^pessimistic x +1 .*all lanes agree after at most 1 cycle$/m);
    expect(stdout).toMatch(/^power-up decides +2 /m);
    expect(stdout).toMatch(/^inputs held +states come again every 16 cycles$/m);
    expect(stdout).toMatch(/^ {2}keep\[1:0\] +0x[0-3] in lane 0, 0x[0-3] in lane \d+$/m);
    expect(stdout).toMatch(/^ {2}after 1 +zero$/m);
    expect(stdout).toMatch(/^ {2}after 1 +count\[3:0\]$/m);
  });

  it('finds nothing where a reset makes all known', async () => {
    const { status, stdout } = await folder.run(
      ...['settle', 'block.v', '--stimulus', 'load.csv', '--json'],
    );
    expect(status).toBe(0);
    const report = JSON.parse(stdout) as SettleReport;
    expect(report.counts).toEqual({ known: 7, agreed: 0, undecided: 0, powerUp: 0 });
    expect(report.elements.map(({ name, knownAfter }) => `${name} ${knownAfter}`)).toEqual([
      ...[3, 2, 1, 0].map((bit) => `count[${bit}] 1`).sort(),
      ...['keep[0] 1', 'keep[1] 1', 'zero 2'],
    ]);
  });

  it('gives with --json lanes that `run` takes up again from their seeds', async () => {
    const settled = await folder.run(
      ...['settle', 'block.v', '--stimulus', 'reset.csv', '--lanes', '9', '--seed', '70', '--json'],
    );
    const report = JSON.parse(settled.stdout) as SettleReport & { rerun: string };
    const { witness } = report.elements.find(({ name }) => name === 'keep[1]')!;
    const [, ...args] = report.rerun.split(' ');
    for (const [i, lane] of witness!.lanes.entries()) {
      const { seed, state } = report.powerUps.find((powerUp) => powerUp.lane === lane)!;
      expect(seed).toBe(`${70 + lane}`);
      const ran = await folder.run(
        ...[...args, seed, '--response', 'lane.csv', '--engine', 'bytecode'],
      );
      expect(ran.status).toBe(0);
      const rows = folder.read('lane.csv').trimEnd().split('\n');
      expect(rows).toHaveLength(1 + report.cycles);
      // The register keeps what it starts with.
      const keep = Number(rows.at(-1)!.split(',')[2]);
      expect((keep >> 1) & 1).toBe(witness!.values[i]);
      const place = report.elements.findIndex(({ name }) => name === 'keep[1]');
      expect(state[place]).toBe(`${witness!.values[i]}`);
    }
  });

  it('says how to run a lane again, with all options that make the netlist', async () => {
    const { stdout } = await folder.run(
      ...['settle', '--lanes', '40', '--top', 'block', 'block.v', '--define', "A=b'c"],
      ...['--seed=3', '--clock', 'clk=4@1', '--cycles', '3', '--picture', 'again.svg'],
    );
    expect(stdout).toMatch(
      /^lane \d+ again: clockstride run --top block block\.v --define 'A=b'\\''c' --clock clk=4@1 --cycles 3 --power-up random --seed \d+$/m,
    );
    expect(stdout).toContain('note: all inputs are held at 0; use --stimulus to drive them');
  });

  it('draws the picture, and leaves nothing else behind', async () => {
    const before = folder.names();
    const { status } = await folder.run('settle', 'chain.bench', '--picture', 'chain.svg');
    expect(status).toBe(0);
    expect(folder.names()).toEqual([...before, 'chain.svg'].sort());
    const picture = folder.read('chain.svg');
    expect(picture).toMatch(/^<svg /);
    expect(picture).toContain('16 → 0');
    expect(picture.endsWith('</svg>\n')).toBe(true);
  });

  it('has its help with an example and what its exit status tells', async () => {
    const { status, stdout } = await folder.run('settle', '--help');
    expect(status).toBe(0);
    expect(stdout).toContain('Exit status: 0 every state element is known');
    expect(stdout).toContain('clockstride settle lock.v --stimulus reset.csv');
  });

  it.each([
    ['an unknown input', ['--stimulus', 'x.csv'], 'x.csv:2:1: rst is x: '],
    ['a missing stimulus', ['--stimulus', 'absent.csv'], 'error: absent.csv cannot be used: '],
    ['a single lane', ['--lanes', '1'], "error: option '--lanes <n>' argument '1' is invalid."],
    ['a seed that is none', ['--seed', 'oak'], "error: option '--seed <seed>'"],
    ['an unknown clock', ['--clock', 'tick=4'], 'error: --clock: '],
    ['a picture in no folder', ['--picture', 'no/a.svg'], 'error: no/a.svg cannot be written: '],
  ])('refuses %s in one line, and writes nothing', async (_, args, beginning) => {
    const before = folder.names();
    const { status, stdout, stderr } = await folder.run('settle', 'block.v', ...args);
    expect(stderr.slice(0, beginning.length)).toBe(beginning);
    expect(stderr).toMatch(/^.+\n$/);
    expect(status).toBe(2);
    expect(stdout).toBe('');
    expect(folder.names()).toEqual(before);
  });
});
