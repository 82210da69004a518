import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeEach, describe, expect, it } from 'vitest';
import { cacheHome, WorkFolder } from '../support/command.js';

const folder = join(cacheHome, 'clockstride');

const files = {
  'top.v': `\`include "part.vh"
module top(input clk, input d, output [3:0] q);
  wire open;
  part p(.clk(clk), .d(d ^ open), .q(q));
endmodule
`,
  'part.vh': `module part(input clk, input d, output reg [3:0] q);
  always @(posedge clk) q <= {q[2:0], d ^ q[3]};
endmodule
`,
};

const request = ['run', 'top.v', '--random', '1', '--cycles', '200000', '--signature', '--json'];

/** What a run says, apart from the time that it took. */
function said({
  status,
  stdout,
  stderr,
}: {
  status: number | null;
  stdout: string;
  stderr: string;
}) {
  const { seconds, cyclesPerSecond, ...summary } = JSON.parse(stdout);
  expect(seconds).toBeGreaterThan(0);
  expect(cyclesPerSecond).toBeGreaterThan(0);
  return { status, stderr, summary };
}

const entries = (): string[] => (existsSync(folder) ? readdirSync(folder).sort() : []);

// Where caches are kept elsewhere, tests must not touch the user's own.
describe.runIf(process.platform === 'linux')('clockstride run', () => {
  beforeEach(() => rmSync(folder, { recursive: true, force: true }));

  it('does the same from the cache, with the same warnings', async () => {
    const work = new WorkFolder(files);
    const first = said(await work.run(...request));
    expect(first.status).toBe(0);
    expect(first.stderr).toMatch(/^top\.v:3:\d+: warning/m);
    const kept = entries();
    expect(kept.length).toBeGreaterThan(0);
    expect(said(await work.run(...request))).toEqual(first);
    expect(said(await work.run(...request))).toEqual(first);
    expect(said(await work.run(...request, '--no-cache'))).toEqual(first);
    expect(work.names()).toEqual(['part.vh', 'top.v']);
  });

  it('reads again what has changed', async () => {
    const work = new WorkFolder(files);
    const first = said(await work.run(...request));
    work.write('part.vh', files['part.vh'].replace('d ^ q[3]', 'd'));
    const changed = said(await work.run(...request));
    expect(changed.summary.signature).not.toBe(first.summary.signature);
    work.write('part.vh', files['part.vh']);
    expect(said(await work.run(...request))).toEqual(first);
  });

  it('keeps nothing with --no-cache', async () => {
    const work = new WorkFolder(files);
    await work.run(...request, '--no-cache');
    expect(entries()).toEqual([]);
  });

  it('passes over damaged entries', async () => {
    const work = new WorkFolder(files);
    const first = said(await work.run(...request));
    for (const name of entries()) {
      const content = readFileSync(join(folder, name));
      content[content.length >> 1]! ^= 1;
      writeFileSync(join(folder, name), content);
    }
    expect(said(await work.run(...request))).toEqual(first);
    for (const name of entries()) writeFileSync(join(folder, name), '');
    expect(said(await work.run(...request))).toEqual(first);
  });

  it('works many times at once', async () => {
    const work = new WorkFolder(files);
    const outcomes = await Promise.all(Array.from({ length: 4 }, () => work.run(...request)));
    const [first, ...others] = outcomes.map(said);
    for (const other of others) expect(other).toEqual(first);
    expect(entries().filter((name) => !name.endsWith('.entry'))).toEqual([]);
    expect(said(await work.run(...request))).toEqual(first);
  });

  it('gives the reference the same circuit', async () => {
    const work = new WorkFolder(files);
    const few = ['run', 'top.v', '--random', '1', '--cycles', '2000', '--signature', '--json'];
    const first = said(await work.run(...few)).summary;
    const reference = said(await work.run(...few, '--engine', 'reference')).summary;
    expect(reference.signature).toBe(first.signature);
  });
});
