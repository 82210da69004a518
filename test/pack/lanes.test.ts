import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import type * as packaged from '../../runtime/model/lanes/index.js';
import type { SavedState } from '../../runtime/model/savedState.js';
import { designFrom } from '../support/ownCircuits.js';
import {
  importLanes,
  importPackage,
  type ModelModule,
  packageFolder,
  packInto,
} from '../support/packages.js';

const root = packageFolder();
const SEED = 20261201;

const source = `module count(input clk, input clear, input [7:0] by, input [39:0] far,
    output reg [7:0] at, output [39:0] seen);
  reg [39:0] held;
  wire [7:0] following = at + by;
  assign seen = held ^ far;
  always @(posedge clk or posedge clear) if (clear) at <= 8'd3; else at <= following;
  always @(posedge clk) held <= far;
endmodule`;
const count = designFrom(new Source('count.v', source));

let alone: ModelModule;
let many: typeof packaged;
let three: typeof packaged;

beforeAll(async () => {
  await packInto(join(root, 'alone'), count, { keepNames: 'all' });
  await packInto(join(root, 'many'), count, { keepNames: 'all', lanes: 64 });
  await packInto(join(root, 'three'), designOf(count.circuit, { threeValued: true }), {
    lanes: 32,
  });
  alone = await importPackage(join(root, 'alone'));
  [many, three] = [await importLanes(join(root, 'many')), await importLanes(join(root, 'three'))];
});

describe('a package of many lanes', () => {
  it('has a runtime below 14 kB', () => {
    expect(gzipSync(readFileSync(join(root, 'many', 'model.mjs'))).length).toBeLessThan(14_000);
  });

  it('does in each lane what a package of one sequence does', async () => {
    const lanes = await many.load(undefined, { powerUp: 'random', seed: 7 });
    const random = fc.sample(fc.nat(255), { seed: SEED, numRuns: 64 * 40 });
    const by = Array.from({ length: 64 }, (_, lane) =>
      Uint8Array.from(random.slice(lane * 40, lane * 40 + 40)),
    );
    const far = Uint32Array.from({ length: 80 }, (_, i) => (i % 2 ? i : i * 0x7654321));
    lanes.write({ far: 77n }).write({ clear: 1, by: 9 }, 33).step(3).write({ clear: 0 });
    const { response } = lanes.run({ cycles: 40, stimulus: { by, far } });
    for (const lane of [0, 31, 32, 33, 63]) {
      const model = await alone.load(undefined, { powerUp: 'random', seed: 7 + lane });
      model.write({ far: 77n });
      if (lane === 33) model.write({ clear: 1, by: 9 });
      model.step(3).write({ clear: 0 });
      const expected = model.run({ cycles: 40, stimulus: { by: by[lane]!, far } });
      for (const name of ['at', 'seen']) {
        expect(response[name]![lane], `${name} of lane ${lane}`).toEqual(expected.response[name]);
      }
      expect(lanes.read(lane)).toEqual(model.read());
      expect(lanes.read('by', lane)).toBe(model.read('by'));
      for (const net of ['held', 'following']) {
        expect(lanes.peek(net, lane), net).toBe(model.peek(net));
      }
      expect(lanes.save(lane)).toEqual(model.save());
    }
    expect([lanes.lanes, lanes.cycle, lanes.faults]).toEqual([64, 43, []]);
  });

  it('shows all lanes at once where none is named', async () => {
    const lanes = await many.load();
    for (let lane = 0; lane < 64; lane++) lanes.write({ by: lane * 3 }, lane);
    lanes.step();
    const expected = Array.from({ length: 64 }, (_, lane) => lane * 3);
    expect(lanes.read('at')).toEqual(expected);
    expect(lanes.peek('at')).toEqual(expected);
    expect(lanes.read()).toEqual({ at: expected, seen: new Array(64).fill(0n) });
    expect(lanes.step(2).peek('following')).toEqual(expected.map((at) => (at * 4) % 256));
  });

  it('runs blocks with the same inputs in all lanes, and holds what is left out', async () => {
    const lanes = await many.load();
    const by = Uint8Array.of(1, 2, 3);
    const result = lanes.run({ cycles: 3, stimulus: { by }, response: ['at'] });
    expect(result.response.at).toEqual(new Array(64).fill(Uint32Array.of(0, 1, 3)));
    expect(Object.keys(result.response)).toEqual(['at']);
    lanes.write({ by: 10 }, 5);
    const held = lanes.run({ cycles: 2, stimulus: {}, response: ['at'] }).response.at!;
    expect([held[4], held[5]]).toEqual([Uint32Array.of(6, 9), Uint32Array.of(6, 16)]);
    expect(lanes.run({ cycles: 0 }).response.seen![9]).toEqual(new Uint32Array(0));
  });

  it('runs until values have come in each lane, and tells when', async () => {
    const lanes = await many.load();
    for (let lane = 0; lane < 64; lane++) lanes.write({ by: lane % 2 ? 4 : 8 }, lane);
    expect(lanes.runUntil({ at: 16 }, 100)).toEqual({
      met: true,
      cycles: 4,
      first: Array.from({ length: 64 }, (_, lane) => (lane % 2 ? 4 : 2)),
    });
    const { met, cycles, first } = lanes.write({ by: 0 }, 3).runUntil({ at: 20 }, 9);
    expect([met, cycles, first[1], first[3]]).toEqual([false, 9, 1, undefined]);
    expect(lanes.cycle).toBe(13);
  });

  it('goes back to power-up, and to saved states, in a lane or in all', async () => {
    const lanes = await many.load();
    for (let lane = 0; lane < 64; lane++) lanes.write({ by: lane, far: 5n }, lane);
    const saved = lanes.step(2).save();
    lanes.step(3).reset(9).restore(JSON.stringify(saved[2]), 8);
    const at = (lane: number) => lanes.read('at', lane);
    expect([at(7), at(8), at(9)]).toEqual([35, 4, 0]);
    expect([lanes.read('by', 8), lanes.read('by', 9), lanes.save(8).cycle]).toEqual([2, 0, 2]);
    expect(lanes.step().save(9).cycle).toBe(1);
    expect([at(7), at(8)]).toEqual([42, 6]);
    lanes.restore(saved as SavedState[]);
    expect(lanes.read('at')).toEqual(Array.from({ length: 64 }, (_, lane) => 2 * lane));
    expect(lanes.restore(saved[3]!).read('at')).toEqual(new Array(64).fill(6));
    expect(lanes.reset().read('at')).toEqual(new Array(64).fill(0));
  });

  it('exchanges states with a package of one sequence', async () => {
    const [lanes, model] = [await many.load(), await alone.load()];
    lanes.write({ by: 5, far: 3n }, 40).step(7);
    model.restore(lanes.save(40));
    expect([model.read('at'), model.cycle]).toEqual([35, 7]);
    lanes.restore(model.step(3).save(), 2);
    expect(lanes.step(2).read('at', 2)).toBe(60);
  });

  it('has x as one of three values do', async () => {
    const lanes = await three.load();
    expect(lanes.read('at', 31)).toBe('0bxxxxxxxx');
    lanes.write({ clear: 1 }).step().write({ clear: 0 }).write({ by: '0b0000000x' }, 4);
    expect(lanes.peek('at', 4)).toBe(3);
    expect([lanes.step().read('at', 4), lanes.read('at', 5)]).toEqual(['0b00000xxx', 3]);
    const unknown = {
      by: Array.from({ length: 32 }, (_, lane) => Uint8Array.of(lane === 6 ? 1 : 0)),
    };
    const result = lanes.run({ cycles: 1, stimulus: { by: Uint8Array.of(0) }, unknown });
    expect([result.response.at![5]![0], result.unknown!.at![5]![0]]).toEqual([3, 0]);
    expect([lanes.read('at', 6), lanes.read('at', 7)]).toEqual(['0b00000xxx', 3]);
  });
});

describe('misuse of lanes', () => {
  it.each<[string, (model: packaged.Model) => unknown, string]>([
    ['a lane too high', (m) => m.read('at', 64), 'expected a lane from 0 to 63, got number 64'],
    ['half a lane', (m) => m.write({ by: 1 }, 0.5), 'expected a lane from 0 to 63, got number 0.5'],
    ['a lane by name', (m) => m.reset('3' as never), "expected a lane from 0 to 63, got '3'"],
    ['an unknown port', (m) => m.read('bye', 3), 'expected a port (at, seen, clear, by, far)'],
    [
      'an unknown net',
      (m) => m.peek('bye', 3),
      'expected a port, a kept net or a word of a memory',
    ],
    ['a value too high', (m) => m.write({ by: 256 }, 3), 'by takes 0 to 255, got number 256'],
    [
      'columns for some lanes',
      (m) => m.run({ cycles: 1, stimulus: { by: [new Uint8Array(1)] } }),
      'by takes a column, or one for each of 64 lanes, got 1',
    ],
    ['states for some lanes', (m) => m.restore([m.save(0)]), 'expected 64 saved states, got 1'],
    ['half a cycle', (m) => m.step(0.5), 'expected a count of cycles, got number 0.5'],
    ['no limit', (m) => m.runUntil({ at: 1 }, -1), 'expected a count of cycles, got number -1'],
  ])('throws a RangeError for %s, and changes nothing', async (_, act, message) => {
    const model = await many.load();
    const before = model.write({ by: 3 }).step(2).save();
    expect(() => act(model)).toThrow(RangeError);
    expect(() => act(model)).toThrow(message);
    expect(model.save()).toEqual(before);
  });

  it('throws for modules of another number of lanes, for memories, and once disposed of', async () => {
    const module = await many.compile();
    await expect(alone.load(module)).rejects.toThrow('with 1 lanes, got format 1 with 64');
    const model = await many.load(module, { powerUp: 'one' });
    model.dispose();
    expect(() => model.read(3)).toThrow('got one that has been disposed of');
    const text = `module ram(input clk, input [9:0] at, output [7:0] q);
      reg [7:0] m [0:1023]; assign q = m[at]; always @(posedge clk) m[at] <= q + 1;
    endmodule`;
    const ram = designFrom(new Source('ram.v', text));
    await expect(packInto(join(root, 'ram'), ram, { lanes: 32 })).rejects.toThrow(
      'lanes cannot run memories, and the circuit has 1: m',
    );
    const page = join(root, 'count.html');
    await expect(packInto(join(root, 'no'), count, { lanes: 32, page })).rejects.toThrow(
      'expected 1 lane for a page, got 32',
    );
  });
});
