import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { createEngine } from '../../compiler/engines.js';
import { randomStimulus } from '../../runtime/stream.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { importPackage, type ModelModule, packageFolder, packInto } from '../support/packages.js';
import { smallCircuit } from '../support/smallCircuit.js';

const root = packageFolder();

const source = `
module add(input [7:0] a, input [7:0] b, input cin, output [7:0] sum, output cout);
  wire [8:0] whole = a + b + cin;
  assign sum = whole[7:0], cout = whole[8];
endmodule
module count(input clk, input clear, input [7:0] by, input [39:0] far,
             output [7:0] now, output reg [7:0] at, output [39:0] seen, output full);
  reg [39:0] held;
  wire [7:0] following;
  wire carry;
  add u1(at, by, 1'b0, following, carry);
  assign now = following, seen = held ^ far, full = carry & ~clear;
  always @(posedge clk or posedge clear)
    if (clear) at <= 8'd3; else at <= following;
  always @(posedge clk) held <= far;
endmodule`;

const count = designFrom(new Source('count.v', source));

let two: ModelModule;
let three: ModelModule;
let lock: ModelModule;

beforeAll(async () => {
  const pack = async (
    name: string,
    ...rest: Parameters<typeof packInto> extends [string, ...infer R] ? R : never
  ) => {
    await packInto(join(root, name), ...rest);
    return importPackage(join(root, name));
  };
  two = await pack('two', count, { keepNames: 'all' });
  three = await pack('three', designOf(count.circuit, { threeValued: true }), {
    keepNames: ['u1.*', 'carr?'],
  });
  lock = await pack('lock', ownDesign('lock'));
});

describe('a loaded model', () => {
  it('shows at once what follows from inputs, and registers after the clock', async () => {
    const model = await two.load();
    expect(model.read()).toEqual({ now: 0, at: 0, seen: 0n, full: 0 });
    model.write({ by: 5, far: 0x12_3456_789an });
    expect(model.read()).toEqual({ now: 5, at: 0, seen: 0x12_3456_789an, full: 0 });
    expect(model.cycle).toBe(0);
    model.step();
    expect(model.read()).toEqual({ now: 10, at: 5, seen: 0n, full: 0 });
    expect(model.step(3).read('at')).toBe(20);
    expect(model.read('by')).toBe(5);
    expect(model.cycle).toBe(4);
  });

  it('resets by its input without a clock, and to power-up', async () => {
    const model = await two.load();
    model.write({ by: 9 }).step(2).write({ clear: 1 });
    expect(model.read('at')).toBe(3);
    model.reset();
    expect([model.cycle, model.read('at'), model.read('by'), model.read('clear')]).toEqual([
      0, 0, 0, 0,
    ]);
  });

  it('runs blocks on typed arrays as it does step by step', async () => {
    const [block, steps] = [await two.load(), await two.load()];
    const by = Uint8Array.from({ length: 3000 }, (_, i) => i * 37);
    const far = Uint32Array.from({ length: 6000 }, (_, i) => (i % 2 ? i % 256 : i * 0x1234567));
    block.write({ clear: 0 }).step(2);
    steps.step(2);
    const { response } = block.run({ cycles: 3000, stimulus: { by, far } });
    for (let i = 0; i < 3000; i++) {
      steps.write({ by: by[i]!, far: (BigInt(far[2 * i + 1]!) << 32n) | BigInt(far[2 * i]!) });
      const seen = steps.read('seen') as bigint;
      const expected = [
        steps.read('now'),
        steps.read('full'),
        Number(seen & 0xffffffffn),
        Number(seen >> 32n),
      ];
      const { now, full } = response;
      const actual = [now![i], full![i], response.seen![2 * i], response.seen![2 * i + 1]];
      expect(actual, `cycle ${i}`).toEqual(expected);
      steps.step();
    }
    expect(block.read()).toEqual(steps.read());
    expect(block.save()).toEqual(steps.save());
  });

  it('records only what is asked for, and holds inputs that are left out', async () => {
    const model = await two.load();
    const result = model.write({ by: 2 }).run({ cycles: 3, response: ['at'] });
    expect(result).toEqual({ cycles: 3, response: { at: Uint32Array.of(0, 2, 4) } });
  });

  it('runs to values of outputs exactly, and to a question', async () => {
    const model = await two.load();
    model.write({ by: 1 });
    expect(model.runUntil({ at: 200 }, 1000)).toEqual({ met: true, cycles: 200 });
    expect([model.read('at'), model.cycle]).toEqual([200, 200]);
    expect(model.runUntil({ at: 200 }, 1000)).toEqual({ met: true, cycles: 0 });
    expect(model.runUntil({ at: 10, full: 1 }, 500)).toEqual({ met: false, cycles: 500 });
    expect(model.cycle).toBe(700);
    const until = (m: typeof model) => m.read('full') === 1;
    const other = await two.load();
    other.write({ by: 7 });
    expect(other.runUntil(until, 100)).toEqual({ met: true, cycles: 36 });
    expect(other.runUntil({ at: 252 }, 36)).toEqual({ met: true, cycles: 0 });
  });

  it('finds the moment that the last cycle allowed brings', async () => {
    const model = await two.load();
    model.write({ by: 1 });
    expect(model.runUntil({ at: 16 }, 16)).toEqual({ met: true, cycles: 16 });
    expect(model.runUntil({ at: 40 }, 23)).toEqual({ met: false, cycles: 23 });
  });

  it('lets one look at registers and kept nets by name', async () => {
    const model = await two.load();
    model.write({ by: 250, far: 77n }).step(2);
    expect(model.peek('held')).toBe(77n);
    expect(model.peek('u1.whole')).toBe(494);
    expect(model.peek('u1.sum')).toBe(model.read('now'));
    expect(model.peek('carry')).toBe(1);
    expect(model.peek('at')).toBe(244);
    expect(model.nets.map(({ name }) => name)).toEqual(
      expect.arrayContaining(['held', 'carry', 'following', 'u1.whole']),
    );
  });

  it('keeps two instances of one module apart', async () => {
    const module = await two.compile();
    const [a, b] = [await two.load(module), await two.load(module)];
    a.write({ by: 1 }).step(5);
    b.write({ by: 2 }).step(5);
    expect([a.read('at'), b.read('at')]).toEqual([5, 10]);
  });

  it('starts as the power-up says, like a run with the same seed', async () => {
    const { circuit } = count;
    for (const powerUp of ['zero', 'one', 'random'] as const) {
      const model = await two.load(undefined, { powerUp, seed: 42 });
      const state = powerUpState(circuit, powerUp, 42);
      const bits = [...state].reverse().join('');
      const shown = [model.peek('held'), model.read('at')] as [bigint, number];
      const text = shown[0].toString(2).padStart(40, '0');
      const at = shown[1].toString(2).padStart(8, '0');
      expect([text + at, at + text]).toContain(bits);
    }
    await expect(two.load(undefined, { powerUp: 'unknown' })).rejects.toThrow(
      "expected powerUp zero, one, random, got 'unknown'",
    );
  });

  it('tells listeners what has changed, at the end of a call', async () => {
    const model = await two.load();
    const told: unknown[] = [];
    const end = model.subscribe((changes, cycle) => told.push([changes, cycle]), ['at', 'by']);
    model.write({ by: 4 });
    model.step(2);
    model.write({ by: 4 });
    model.run({ cycles: 2, response: [] });
    model.reset();
    end();
    model.write({ by: 1 });
    expect(told).toEqual([
      [{ by: 4 }, 0],
      [{ at: 8 }, 2],
      [{ at: 16 }, 4],
      [{ at: 0, by: 0 }, 0],
    ]);
  });

  it('tells of what a listener itself has changed', async () => {
    const model = await two.load();
    const told: number[] = [];
    model.subscribe(
      ({ at }) => {
        told.push(at as number);
        if (told.length < 3) model.step();
      },
      ['at'],
    );
    model.write({ by: 1 }).step();
    expect(told).toEqual([1, 2, 3]);
  });
});

describe('a saved state', () => {
  it('goes on exactly, in another instance, by way of JSON, after inputs have changed', async () => {
    const [a, b] = [await lock.load(), await lock.load()];
    a.write({ reset: 1 }).step(2).write({ reset: 0, call_below: 1, level_low: 1 }).step(7);
    a.write({ doorway_clear: 1 });
    b.step(3).restore(JSON.stringify(a.save()));
    expect(b.cycle).toBe(9);
    expect(b.read()).toEqual(a.read());
    expect(b.step(500).read()).toEqual(a.step(500).read());
    expect(b.save()).toEqual(a.save());
  });

  it('fits another package of the same netlist, and with x only one that has x', async () => {
    const [known, unknown] = [await two.load(), await three.load()];
    known.write({ by: 3, far: 9n }).step(4);
    unknown.restore(known.save());
    expect(unknown.read()).toEqual(known.read());
    expect(unknown.step(3).peek('held')).toBe(known.step(3).peek('held'));
    known.restore(unknown.save());
    unknown.write({ by: 'x'.padStart(10, '0b0000000') }).step();
    expect(() => known.restore(unknown.save())).toThrow(
      /^expected a state of 0 and 1, got x in at/,
    );
  });

  it('is refused where it is of another netlist or damaged, and nothing changes', async () => {
    const model = await two.load();
    model.write({ by: 3 }).step(2);
    const good = model.save();
    const other = (await lock.load()).save();
    const refusals: [unknown, RegExp][] = [
      [other, /^expected a state of count \(netlist [0-9a-f]{64}\), got one of lock/],
      ['{', /which is no JSON$/],
      ['3', /^expected a saved state, got number 3$/],
      [null, /^expected a saved state, got null$/],
      [{ ...good, format: 'v0' }, /^expected a saved state of format/],
      [{ ...good, state: 'AAAA' }, /^expected state to be 6 bytes in base64/],
      [{ ...good, state: '%' }, /^expected state to be 6 bytes in base64/],
      [{ ...good, inputs: undefined }, /^expected inputs to be 8 bytes in base64/],
      [{ ...good, cycle: -1 }, /^expected cycle to be a count/],
      [{ ...good, elements: '0' }, /made by another version$/],
    ];
    for (const [save, message] of refusals) {
      expect(() => model.restore(save as string)).toThrow(message);
    }
    expect(model.save()).toEqual(good);
  });
});

describe('a model with x', () => {
  it('starts unknown and becomes known as a three-valued run does', async () => {
    const model = await three.load();
    expect(model.read()).toEqual({
      now: '0bxxxxxxxx',
      at: '0bxxxxxxxx',
      seen: `0b${'x'.repeat(40)}`,
      full: 0,
    });
    expect(model.peek('held')).toBe(`0b${'x'.repeat(40)}`);
    model.write({ clear: 1, by: '0b0000000x' });
    expect([model.read('now'), model.peek('carry'), model.peek('u1.a')]).toEqual([
      '0b00000xxx',
      0,
      3,
    ]);
    model.write({ by: 1 });
    expect(model.read('now')).toBe(4);
  });

  it('runs blocks with x in columns of their own', async () => {
    const model = await three.load();
    model.write({ clear: 1 }).step().write({ clear: 0 });
    const { response, unknown } = model.run({
      cycles: 3,
      stimulus: { by: Uint8Array.of(1, 3, 0) },
      unknown: { by: Uint8Array.of(0, 2, 0) },
      response: ['at', 'now'],
    });
    expect([...response.at!, ...unknown!.at!]).toEqual([3, 4, 5, 0, 0, 2]);
  });

  it('gives the response of the engine it was made from', async () => {
    const design = designOf(count.circuit, { threeValued: true });
    const engine = await createEngine(design, 'reference');
    engine.reset(powerUpState(design.circuit, 'unknown'));
    const model = await three.load();
    for (const { rows, cycles, stride } of randomStimulus(design.layout, 5, 200)) {
      const [expected, actual] = [0, 0].map(() => new Uint32Array(cycles * model.outputWords));
      engine.run(cycles, rows, stride, expected);
      model.runRows(cycles, rows, actual);
      expect(actual).toEqual(expected);
    }
  });
});

describe('a model in a worker', () => {
  it('does what one in this thread does', async () => {
    const [here, there] = [await two.load(), await two.loadInWorker(undefined, { seed: 1 })];
    const told: unknown[] = [];
    const end = await there.subscribe((changes, cycle) => told.push([changes, cycle]), ['at']);
    await there.write({ by: 5 });
    here.write({ by: 5 });
    await there.step(4);
    expect(there.cycle).toBe(4);
    expect(await there.read()).toEqual(here.step(4).read());
    expect(await there.peek('held')).toBe(0n);
    expect(await there.runUntil({ at: 35 }, 100)).toEqual(here.runUntil({ at: 35 }, 100));
    const request = { cycles: 9, stimulus: { by: Uint8Array.from({ length: 9 }, (_, i) => i) } };
    expect(await there.run(request)).toEqual(here.run(request));
    expect(await there.save()).toEqual(here.save());
    end();
    await there.reset();
    expect(await there.read('at')).toBe(0);
    await there.restore(JSON.stringify(here.save()));
    expect(await there.read('at')).toBe(here.read('at'));
    expect(told).toEqual([
      [{ at: 20 }, 4],
      [{ at: 35 }, 7],
      [{ at: 71 }, 16],
    ]);
    const rows = new Uint32Array(3 * there.inputWords);
    const response = await there.runRows(3, rows, new Uint32Array(3 * there.outputWords));
    const expected = new Uint32Array(3 * here.outputWords);
    here.runRows(3, rows, expected);
    expect(response).toEqual(expected);
    there.dispose();
  });

  it('rejects what is wrong with the same errors, and goes on', async () => {
    const there = await two.loadInWorker();
    await expect(there.write({ by: 300 })).rejects.toThrow(
      new RangeError('by takes 0 to 255, got number 300'),
    );
    await expect(there.write({ by: 3n })).rejects.toThrow(TypeError);
    await expect(there.peek('nothing')).rejects.toThrow(RangeError);
    await expect(there.runUntil((() => true) as never, 3)).rejects.toThrow(TypeError);
    const aborted = AbortSignal.abort(new Error('enough'));
    await expect(there.step(3, { signal: aborted })).rejects.toThrow('enough');
    expect(await there.read('at')).toBe(0);
    const pending = there.step(1e12);
    there.dispose();
    await expect(pending).rejects.toThrow('disposed of');
    await expect(there.read()).rejects.toThrow('disposed of');
    const foreign = readFileSync(join(root, 'lock', 'model.wasm'));
    await expect(two.loadInWorker(foreign)).rejects.toThrow(/expected the module of count/);
  });

  it('ends a long call on demand, and stays where it got to', async () => {
    const there = await two.loadInWorker();
    await there.write({ by: 1 });
    const abort = new AbortController();
    let done = 0;
    const onProgress = (cycles: number): void => {
      done = cycles;
      abort.abort();
    };
    const waiting = there.step(1e12, { signal: abort.signal, onProgress });
    const after = there.read('at');
    await expect(waiting).rejects.toThrow(expect.objectContaining({ name: 'AbortError' }));
    expect(there.cycle).toBeGreaterThanOrEqual(done);
    expect(await after).toBe(there.cycle % 256);
    there.dispose();
  });
});

describe('misuse', () => {
  it.each<[string, (model: Awaited<ReturnType<ModelModule['load']>>) => unknown, string]>([
    [
      'an unknown input',
      (m) => m.write({ bye: 1 }),
      "expected an input (clear, by, far), got 'bye'",
    ],
    [
      'a clock',
      (m) => m.write({ clk: 1 }),
      'expected an input, got clock clk, which ticks by itself',
    ],
    [
      'an unknown port',
      (m) => m.read('bye'),
      "expected a port (now, at, seen, full, clear, by, far), got 'bye'",
    ],
    [
      'a net not kept',
      (m) => m.peek('nothing'),
      "expected a port, a kept net or a word of a memory, got 'nothing'; see nets and memories",
    ],
    ['half a cycle', (m) => m.step(0.5), 'expected a count of cycles, got number 0.5'],
    [
      'no limit',
      (m) => m.runUntil({ at: 1 }, Number.POSITIVE_INFINITY),
      'expected a count of cycles, got number Infinity',
    ],
    [
      'a short column',
      (m) => m.run({ cycles: 3, stimulus: { by: new Uint8Array(2) } }),
      'by needs 3 values, got 2',
    ],
    [
      'a short wide one',
      (m) => m.run({ cycles: 3, stimulus: { far: new Uint32Array(5) } }),
      'far needs 6 values (2 for each of 3 cycles), got 5',
    ],
    [
      'a value too high',
      (m) => m.run({ cycles: 2, stimulus: { by: Uint32Array.of(0, 256) } }),
      'by takes 0 to 255 in cycle 1, got 256',
    ],
    [
      'x without x',
      (m) => m.run({ cycles: 1, unknown: { by: Uint8Array.of(1) } }),
      'expected no unknown bits in a model of two values, got some',
    ],
    ['short rows', (m) => m.runRows(2, new Uint32Array(3)), 'stimulus needs 4 words, got 3'],
  ])('throws a RangeError for %s', async (_, act, message) => {
    const model = await two.load();
    const before = model.save();
    expect(() => act(model)).toThrow(new RangeError(message));
    expect(model.save()).toEqual(before);
  });

  it.each<[string, (model: Awaited<ReturnType<ModelModule['load']>>) => unknown, string]>([
    ['no values', (m) => m.write(null as never), 'expected values of inputs, got null'],
    ['values in a list', (m) => m.write([1] as never), 'expected values of inputs, got Array'],
    ['a text', (m) => m.write({ by: '3' }), "by takes a number (8 bits), got '3'"],
    [
      'no request',
      (m) => m.run(undefined as never),
      'expected a request such as { cycles: 1 }, got undefined',
    ],
    [
      'columns that are none',
      (m) => m.run({ cycles: 1, stimulus: 5 as never }),
      'expected columns by port, got number 5',
    ],
    [
      'one name for a list',
      (m) => m.run({ cycles: 1, response: 'at' as never }),
      "expected a list of port names, got 'at'",
    ],
    [
      'no condition',
      (m) => m.runUntil('at' as never, 3),
      "expected values of outputs or a function, got 'at'",
    ],
    ['no rows', (m) => m.runRows(1, [1] as never), 'expected rows in a Uint32Array, got Array'],
    [
      'one name to listen to',
      (m) => m.subscribe(() => {}, 'at' as never),
      "expected a list of port names, got 'at'",
    ],
  ])('throws a TypeError for %s', async (_, act, message) => {
    const model = await two.load();
    const before = model.save();
    expect(() => act(model)).toThrow(new TypeError(message));
    expect(model.save()).toEqual(before);
  });

  it.each([-1, 2 ** 33, 1.5, Number.NaN])(
    'throws a RangeError for %d as a value, and a state of cycles',
    async (value) => {
      const model = await two.load();
      expect(() => model.write({ by: value })).toThrow(
        new RangeError(`by takes 0 to 255, got number ${value}`),
      );
      expect(() => model.runUntil({ at: value }, 9)).toThrow(RangeError);
      expect(() => model.write({ far: 2n ** 40n })).toThrow(
        new RangeError('far takes 0 to 2n ** 40n - 1n, got bigint 1099511627776n'),
      );
      expect(model.read('by')).toBe(0);
    },
  );

  it('throws for addresses that lead nowhere, and for seeds that are none', async () => {
    await expect(two.load('model.wasm')).rejects.toThrow(
      new TypeError("expected a URL, such as one from import.meta.url, got 'model.wasm'"),
    );
    const seed = 'a' as never;
    await expect(two.load(undefined, { powerUp: 'random', seed })).rejects.toThrow(RangeError);
  });

  it('throws a TypeError for kinds of columns, and for a model disposed of', async () => {
    const model = await two.load();
    expect(() => model.run({ cycles: 1, stimulus: { far: new Uint8Array(9) } })).toThrow(
      new TypeError('far takes a Uint32Array, got Uint8Array'),
    );
    expect(() => model.write({ by: 1, far: 3 })).toThrow(TypeError);
    expect(model.read('by'), 'what came with a wrong value').toBe(0);
    model.dispose();
    model.dispose();
    for (const act of [
      () => model.read(),
      () => model.step(),
      () => model.nets,
      () => model.save(),
    ]) {
      expect(act).toThrow(
        new TypeError('expected a live model, got one that has been disposed of'),
      );
    }
  });

  it('throws for modules that are not the one, and for changed bytes where asked to verify', async () => {
    const file = (name: string) => readFileSync(join(root, name, 'model.wasm'));
    await expect(two.load(file('lock'))).rejects.toThrow(
      /expected the module of count .* got that of lock/,
    );
    await expect(two.load(file('three'))).rejects.toThrow(
      /2 values\), got that of count .*3 values/,
    );
    const bare = Uint8Array.of(0, 0x61, 0x73, 0x6d, 1, 0, 0, 0);
    await expect(two.load(bare)).rejects.toThrow('got one without a description');
    const changed = file('two');
    changed[changed.length - 1]! ^= 1;
    await expect(two.load(changed, { verify: true })).rejects.toThrow(
      /expected a module with SHA-256/,
    );
    await expect(two.load(file('two'), { verify: true })).resolves.toBeDefined();
    const module = await two.compile();
    await expect(two.load(module, { verify: true })).rejects.toThrow('got a compiled module');
    await expect(two.load(7 as never)).rejects.toThrow(
      'expected an address, bytes or a module, got number 7',
    );
  });

  it('ends a run at a cycle that has no result, at the cycle that the reference ends at', async () => {
    const ring = smallCircuit({
      inputs: ['clk', 'go'],
      outputs: ['y'],
      registers: { q: { clock: 'clk', data: 'go' } },
      gates: { y: 'nand y q' },
    });
    await packInto(join(root, 'ring'), designOf(ring));
    const { load, RunFault } = await importPackage(join(root, 'ring'));
    const model = await load();
    model.step(3).write({ go: 1 });
    const fault = (() => {
      try {
        model.step(9);
      } catch (error) {
        return error as InstanceType<typeof RunFault>;
      }
      throw new Error('no fault');
    })();
    expect(fault).toBeInstanceOf(RunFault);
    expect(fault.message).toContain('y');
    expect(model.cycle).toBe(3 + fault.completed);
    model.reset();
    expect(model.step(2).read('y')).toBe(1);
  });
});
