import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { findCompiler } from '../../compiler/native/findCompiler.js';
import { benchDesign } from '../../compiler/report/bench.js';
import { nativeContestant } from '../../compiler/report/benchNative.js';
import type { BenchOptions } from '../../compiler/report/benchOptions.js';
import { BenchRows } from '../../compiler/report/benchRows.js';
import { benchText } from '../../compiler/report/benchText.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { type SmallCircuit, smallCircuit } from '../support/smallCircuit.js';

const SEED = 20260204;
const quick: BenchOptions = { seconds: 0.002, rounds: 2 };

const compiler = findCompiler();
if ('missing' in compiler) console.log(`bench runs without native C here: ${compiler.missing}`);

const counter: SmallCircuit = {
  inputs: ['clk', 'en'],
  outputs: ['q[1:0]'],
  registers: { 'q[0]': { clock: 'clk', data: 'd0' }, 'q[1]': { clock: 'clk', data: 'd1' } },
  gates: { d0: 'xor q[0] en', carry: 'and q[0] en', d1: 'xor q[1] carry' },
};

const bench = (spec: SmallCircuit, options: BenchOptions = {}) =>
  benchDesign(designOf(smallCircuit(spec)), { ...quick, ...options });

describe('a bench', () => {
  it('has the figures of every engine', async () => {
    const result = await bench(counter);
    expect(result).toMatchObject({ circuit: 'small', gates: 3, registers: 2, rounds: 2 });
    const native = 'command' in compiler ? ['native', 'nativeMarch'] : [];
    const names = ['wasm', 'table', 'bytecode', 'reference', ...native];
    // A compiler need not know the machine that it runs on.
    const measured = Object.keys(result.engines);
    expect(names.filter((name) => measured.includes(name))).toEqual(measured);
    expect(measured).toEqual(expect.arrayContaining(names.slice(0, -1)));
    for (const { nsPerCycle, fastest, slowest, cycles, buildMs } of Object.values(result.engines)) {
      expect(nsPerCycle).toBeGreaterThan(0);
      expect(fastest).toBeLessThanOrEqual(nsPerCycle);
      expect(slowest).toBeGreaterThanOrEqual(nsPerCycle);
      expect(Number.isSafeInteger(cycles) && cycles > 0).toBe(true);
      expect(buildMs).toBeGreaterThan(0);
    }
    expect(result.cycles).toBe(result.engines.wasm.cycles);
  });

  it('has the table as an engine of its own only where runs use it', async () => {
    const small = await bench(counter, { native: 'never' });
    expect(small.engines.table).toBeDefined();
    expect(small.notes.join()).toContain('table is another algorithm');
    const inputs = Array.from({ length: 20 }, (_, i) => `i${i}`);
    const wide = await bench(
      { ...counter, inputs: [...counter.inputs, ...inputs] },
      { native: 'never' },
    );
    expect(wide.engines.table).toBeUndefined();
    expect(wide.notes.join()).not.toContain('table');
  });

  it('says how much code a cycle takes', async () => {
    const { code, gates } = await bench(counter, { native: 'never' });
    expect(code.operations).toBeGreaterThan(0);
    expect(code.bytes).toBeGreaterThan(100);
    const each = (code.operations + code.vectorOperations) / gates;
    expect(code.operationsPerGate).toBeCloseTo(each, 3);
    expect(code.bytesPerGate * gates).toBeCloseTo(code.bytes, 0);
  });

  it('has the ratio of each engine to generated code', async () => {
    const { engines, ratios } = await bench(counter);
    expect(Object.keys(ratios)).toEqual(Object.keys(engines).slice(1));
    for (const name of ['bytecode', 'reference'] as const) {
      const expected = engines[name].nsPerCycle / engines.wasm.nsPerCycle;
      expect(ratios[name]! / expected).toBeCloseTo(1, 3);
    }
  });

  it('compares every engine with generated code before it measures', async () => {
    const steps: string[] = [];
    const { agreement } = await bench(counter, { onProgress: (step) => steps.push(step) });
    expect(Object.values(agreement).every((cycles) => cycles > 0)).toBe(true);
    expect(agreement.bytecode).toBe(4096);
    const compared = steps.indexOf('comparing the responses');
    expect(compared).toBeGreaterThanOrEqual(0);
    expect(steps.findIndex((step) => step.startsWith('warming up'))).toBeGreaterThan(compared);
  });

  it('finds agreement on random circuits', () =>
    fc.assert(
      fc.asyncProperty(
        randomCircuit({ asynchronous: true, clocking: 'edges' }),
        async (circuit) => {
          const result = await benchDesign(designOf(circuit), { ...quick, native: 'never' });
          expect(result.agreement.bytecode).toBeGreaterThan(0);
        },
      ),
      { seed: SEED, numRuns: 5 },
    ));

  it('survives text and JSON', async () => {
    const result = await bench(counter);
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
    const lines = benchText(result).split('\n');
    for (const name of Object.keys(result.engines)) {
      expect(lines.some((line) => line.startsWith(`${name} `))).toBe(true);
    }
  });
});

describe('a bench without native C says why', () => {
  const noteOf = async (spec: SmallCircuit, options: BenchOptions) => {
    const result = await bench(spec, options);
    expect(result.engines.native).toBeUndefined();
    expect(result.ratios.native).toBeUndefined();
    return result.notes.filter((note) => note.startsWith('native'));
  };

  it('where it was not asked for', async () => {
    expect(await noteOf(counter, { native: 'never' })).toEqual([
      'native C is not measured: it was not asked for',
    ]);
  });

  it('where CC names nothing that runs', async () => {
    expect(await noteOf(counter, { environment: { CC: '/nonexistent' } })).toEqual([
      'native C is not measured: CC names /nonexistent, which is no program that can be run',
    ]);
  });

  it('where there is no compiler', async () => {
    const [note] = await noteOf(counter, { environment: { PATH: '' } });
    expect(note).toMatch(/^native C is not measured: no C compiler was found/);
  });

  it('where the compiler fails', async () => {
    const [note] = await noteOf(counter, { environment: { CC: `${process.execPath} -e 0` } });
    expect(note).toContain(`native C is not measured: ${process.execPath} failed with status`);
  });

  it('where a cycle is more than one step', async () => {
    const latched: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['q'],
      latches: { q: { enable: 'clk', data: 'd' } },
    };
    expect(await noteOf(latched, { environment: { CC: process.execPath } })).toEqual([
      'native C is not measured: a cycle is more than one step in C, since there are latches: q',
    ]);
  });

  it('where there are too many gates, unless it is asked for all the same', async () => {
    const design = designOf(smallCircuit(counter));
    const rows = new BenchRows(design);
    const environment = { PATH: '' };
    expect(await nativeContestant(design, rows, 60_001, { environment })).toEqual({
      note:
        'native C is not measured: 60001 gates would keep a C compiler busy for minutes; ' +
        '--native always compiles them',
    });
    const always: BenchOptions = { native: 'always', environment };
    expect(await nativeContestant(design, rows, 60_001, always)).toEqual({
      note: expect.stringContaining('no C compiler was found'),
    });
  });
});
