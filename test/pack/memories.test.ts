import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { includeReader } from '../../compiler/read/verilog/includes.js';
import { designFrom } from '../support/ownCircuits.js';
import { importPackage, type ModelModule, packageFolder, packInto } from '../support/packages.js';

const root = packageFolder();

const source = `module core(input clk, input we, input [9:0] at, input [7:0] d, output [7:0] q);
  reg [7:0] m [0:1023];
  initial $readmemh("first.hex", m);
  assign q = m[at];
  always @(posedge clk) if (we) m[at] <= d;
endmodule
module store(input clk, input we, input [9:0] at, input [7:0] d, output [7:0] q, output [39:0] y);
  core u1(clk, we, at, d, q);
  reg [39:0] \\wide+1 [-2:1][4:67];
  assign y = \\wide+1 [at[9:8] - 2][at[5:0] + 4];
  always @(posedge clk) if (we) \\wide+1 [at[9:8] - 2][at[5:0] + 4] <= {d, 24'd0, d};
endmodule`;

let two: ModelModule;
let three: ModelModule;

beforeAll(async () => {
  writeFileSync(join(root, 'first.hex'), '@10 de ad be ef\n@3ff 5');
  const { circuit } = designFrom(new Source(join(root, 'store.v'), source), {
    readInclude: includeReader([], (path) => readFileSync(path)),
  });
  await packInto(join(root, 'two'), designOf(circuit));
  await packInto(join(root, 'three'), designOf(circuit, { threeValued: true }));
  two = await importPackage(join(root, 'two'));
  three = await importPackage(join(root, 'three'));
});

describe('the memories of a package', () => {
  it('begin with the contents of a data file, and do again after a reset', async () => {
    const model = await two.load();
    const words = () => [0x0f, 0x10, 0x13, 0x3ff].map((i) => model.peek(`u1.m[${i}]`));
    expect(words()).toEqual([0, 0xde, 0xef, 5]);
    model.write({ we: 1, at: 0x13, d: 7 });
    expect([model.read('q'), model.read('q'), model.peek('u1.m[19]')]).toEqual([0xef, 0xef, 0xef]);
    model.step();
    expect([model.read('q'), ...words()]).toEqual([7, 0, 0xde, 7, 5]);
    model.reset();
    expect(words()).toEqual([0, 0xde, 0xef, 5]);
  });

  it('show their words by the indices that are declared', async () => {
    const model = await two.load();
    expect(model.memories).toMatchObject([
      {
        name: 'wide+1',
        width: 40,
        indices: [
          { low: -2, size: 4 },
          { low: 4, size: 64 },
        ],
      },
      { name: 'u1.m', width: 8, indices: [{ low: 0, size: 1024 }] },
    ]);
    model.write({ we: 1, at: 0b11_00_000101, d: 0xab }).step();
    const value = 0xab_0000_00abn;
    expect([model.peek('wide+1[1][9]'), model.peek('wide+1[0][9]')]).toEqual([value, 0n]);
    for (const name of ['u1.m', 'u1.m[1024]', 'u1.m[-1]', 'u1.m[1][1]', 'wide+1[1]', 'u1.m[1.5]']) {
      expect(() => model.peek(name)).toThrow(
        new RangeError(
          `expected a port, a kept net or a word of a memory, got '${name}'; see nets and memories`,
        ),
      );
    }
  });

  it('go along in a saved state, by way of JSON, to another instance and a worker', async () => {
    const [one, other, there] = [await two.load(), await two.load(), await two.loadInWorker()];
    one.write({ we: 1, at: 700, d: 0xca }).step().write({ we: 0, d: 0 });
    const saved = JSON.stringify(one.save());
    other.restore(saved);
    await there.restore(saved);
    expect([other.read('q'), other.peek('u1.m[700]'), await there.peek('u1.m[700]')]).toEqual([
      0xca, 0xca, 0xca,
    ]);
    expect(there.memories).toEqual(one.memories);
    expect(other.reset().write({ at: 700 }).read('q')).toBe(0);
    expect(one.step(3).read('q')).toBe(0xca);
    const damaged = { ...one.save(), memories: 'AAAA' };
    expect(() => other.restore(damaged)).toThrow(/^expected memories to be 2304 bytes in base64/);
    there.dispose();
  });

  it('have x where nothing is given and in words that may have been written', async () => {
    const model = await three.load();
    expect(['u1.m[15]', 'u1.m[16]'].map((word) => model.peek(word))).toEqual(['0bxxxxxxxx', 0xde]);
    expect(model.peek('wide+1[-2][4]')).toBe(`0b${'x'.repeat(40)}`);
    model.write({ we: 'x', at: 16, d: 0xdf }).step();
    expect(model.peek('u1.m[16]')).toBe('0b1101111x');
    const other = await three.load();
    other.restore(JSON.stringify(model.save()));
    expect(other.peek('u1.m[16]')).toBe('0b1101111x');
  });

  it('start as the netlist says and no other way', async () => {
    await expect(two.load(undefined, { powerUp: 'one' })).rejects.toThrow(
      'expected powerUp zero of a model with memories, got one',
    );
    await expect(three.load(undefined, { powerUp: 'zero' })).rejects.toThrow(
      'expected powerUp unknown of a model with memories, got zero',
    );
  });
});
