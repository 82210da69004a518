import { createHash } from 'node:crypto';
import { mkdirSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { WorkFolder } from '../support/command.js';

const files = {
  'top.v': `\`include "size.vh"
module top(input clk, input [3:0] at, input d, output [7:0] y, output q);
  reg [7:0] m [0:63];
  initial $readmemh("first.hex", m, 0, 2);
  assign y = m[at];
  always @(posedge clk) m[at + \`OFFSET] <= y;
  wire n;
  part p(clk, d, n);
  INV u(.A(n), .Y(q));
endmodule
module part(input clk, input d, output reg q); always @(posedge clk) q <= d; endmodule
`,
  'better.v':
    'module part(input clk, input d, output reg q); always @(posedge clk) q <= ~d; endmodule\n',
  'cells.lib': `library (cells) { cell (INV) {
    pin (A) { direction : input; } pin (Y) { direction : output; function : "!A"; } } }
`,
};
const included = { 'size.vh': '`define OFFSET 16\n', 'first.hex': '1 2 3\n' };

const work = new WorkFolder(files);

it('names and hashes every file that was read, and packs the same bytes again', async () => {
  mkdirSync(join(work.path, 'inc'));
  for (const [name, text] of Object.entries(included)) work.write(`inc/${name}`, text);
  const given = ['top.v', 'cells.lib', '--include', 'inc', '--replace', 'part=better.v'];
  const pack = async (): Promise<Record<string, string>> => {
    const { status, stderr } = await work.run('pack', ...given, '--output', 'out');
    expect([status, stderr]).toEqual([0, '']);
    const names = readdirSync(join(work.path, 'out'));
    return Object.fromEntries(names.map((name) => [name, work.read(`out/${name}`)]));
  };
  const first = await pack();
  const manifest = JSON.parse(first['manifest.json']!);
  const hashOf = (text: string): string => createHash('sha256').update(text).digest('hex');
  const wanted = Object.entries({ ...files, ...included }).map(([file, text]) => ({
    file,
    sha256: hashOf(text),
  }));
  const byName = (p: { file: string }, q: { file: string }) => p.file.localeCompare(q.file);
  expect(manifest.sources.sort(byName)).toEqual(wanted.sort(byName));
  expect(manifest.options.replace).toEqual(['part']);
  // What was read before comes from the cache now.
  expect(await pack()).toEqual(first);
  work.write('inc/first.hex', '1 2 4\n');
  const changed = JSON.parse((await pack())['manifest.json']!);
  expect(changed.netlist).not.toBe(manifest.netlist);
});
