import { existsSync, mkdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { WorkFolder } from '../support/command.js';
import { importPackage } from '../support/packages.js';

const netlist = `module gray(input clk, input hold, output [3:0] code);
  reg [3:0] n;
  wire [3:0] more = n + 1;
  assign code = n ^ (n >> 1);
  always @(posedge clk) if (!hold) n <= more;
endmodule
`;

const ram = `module ram(input clk, input [5:0] at, output [7:0] q);
  reg [7:0] m [0:63];
  assign q = m[at];
  always @(posedge clk) m[at] <= q + 1;
endmodule
`;

const work = new WorkFolder({ 'gray.v': netlist, 'ram.v': ram, 'bad.v': 'module bad(input a' });

describe('clockstride pack', () => {
  it('writes a package and tells of it', async () => {
    const { status, stdout, stderr } = await work.run('pack', 'gray.v', '--output', 'gray');
    expect(status).toBe(0);
    expect(stdout).toMatch(/^gray is packed in gray\n {2}model\.wasm +[\d,]+ bytes\n/);
    expect(stdout).toContain('agrees with the reference over 10,000 cycles of random inputs');
    expect(stderr).toBe('');
    const { load } = await importPackage(join(work.path, 'gray'));
    const model = await load();
    expect(Array.from(model.run({ cycles: 4 }).response.code!)).toEqual([0, 1, 3, 2]);
    expect(() => model.peek('more')).toThrow(RangeError);
  });

  it('keeps names, has x, takes a name, and prints JSON', async () => {
    const options = ['--keep-names', 'mo*', '--unknown', '--name', 'gray-code@0.2.0', '--json'];
    const { status, stdout } = await work.run('pack', 'gray.v', '--output', 'sub/gray', ...options);
    expect(status).toBe(0);
    const { files, check, keptNets } = JSON.parse(stdout);
    expect(check).toMatchObject({ engine: 'reference', cycles: 10_000, seed: 1 });
    expect(keptNets).toBe(2);
    expect(Object.keys(files)).toContain('package.json');
    const manifest = JSON.parse(work.read('sub/gray/manifest.json'));
    expect(manifest.options).toEqual({
      keepNames: ['mo*'],
      unknown: true,
      lanes: 1,
      name: 'gray-code',
    });
    const { load } = await importPackage(join(work.path, 'sub/gray'));
    const model = await load(undefined, { powerUp: 'zero', verify: true });
    expect(model.step(2).peek('more')).toBe(3);
  });

  it('writes nothing for a netlist that cannot be read, and says where', async () => {
    const { status, stderr } = await work.run('pack', 'bad.v', '--output', 'bad');
    expect(status).toBe(2);
    expect(stderr).toMatch(/^bad\.v:1:\d+: error: /);
    expect(work.names()).not.toContain('bad');
  });

  it('refuses a folder of someone else, and leaves nothing behind', async () => {
    mkdirSync(join(work.path, 'mine'));
    work.write('mine/diary.txt', 'dear diary');
    const { status, stderr } = await work.run('pack', 'gray.v', '--output', 'mine');
    expect(status).toBe(2);
    expect(stderr).toBe(
      'error: mine holds other files and no package; name another folder or empty it\n',
    );
    expect(readFileSync(join(work.path, 'mine/diary.txt'), 'utf8')).toBe('dear diary');
    expect(work.names().filter((name) => name.startsWith('.'))).toEqual([]);
  });

  it.each([
    [['--name', 'Gray Code'], 'Give a package name in lower case'],
    [['--keep-names', 'all', '--keep-names', 'x'], 'Give all, ports, or patterns.'],
    [['--clock', 'nix=4'], 'error: --clock: '],
    [['--lanes', '12'], 'Allowed choices are 1, 32, 64, 128.'],
  ])('refuses %j', async (options, message) => {
    const { status, stderr } = await work.run('pack', 'gray.v', '--output', 'no', ...options);
    expect(status).toBe(2);
    expect(stderr).toContain(message);
    expect(work.names()).not.toContain('no');
  });

  it('packs lanes, which a page and memories do not have', async () => {
    const lanes = ['--output', 'lanes', '--lanes', '32', '--json'];
    const { status, stdout } = await work.run('pack', 'gray.v', ...lanes);
    expect(status).toBe(0);
    expect(JSON.parse(stdout).check.lanes).toEqual([0, 1, 16, 31]);
    expect(JSON.parse(work.read('lanes/manifest.json')).options.lanes).toBe(32);
    const page = await work.run('pack', 'gray.v', ...lanes, '--page', 'gray.html');
    expect([page.status, page.stderr]).toEqual([
      2,
      'error: a page shows one sequence; give --lanes without --page\n',
    ]);
    const ram = await work.run('pack', 'ram.v', ...lanes);
    expect([ram.status, ram.stderr]).toEqual([
      2,
      'error: lanes run no memories, and m is one; build it from registers with ' +
        '--memories-from 65537, or leave its module out by --black-box\n',
    ]);
  });

  it.runIf(existsSync('/dev/full'))('leaves nothing where there is no space', async () => {
    const before = work.names();
    const both = ['--output', 'new/deep/gray', '--page', '/dev/full'];
    const { status, stdout, stderr } = await work.run('pack', 'gray.v', ...both);
    expect([status, stdout]).toEqual([2, '']);
    expect(stderr).toBe('error: /dev/full cannot be used: no space is left for it\n');
    expect(work.names()).toEqual(before);
  });

  it('refuses to go without an output or a page', async () => {
    const { status, stderr } = await work.run('pack', 'gray.v');
    expect(status).toBe(2);
    expect(stderr).toBe('error: say what to write, with --output DIR or --page FILE\n');
  });

  it('explains itself, with an example and its exit statuses', async () => {
    const { status, stdout } = await work.run('pack', '--help');
    expect(status).toBe(0);
    expect(stdout).toContain('Exit status: 0 written, 1 the package departs');
    expect(stdout).toContain('clockstride pack lock.v --output lock-model');
  });
});
