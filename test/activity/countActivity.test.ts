import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { activityTable } from '../../compiler/activity/activityTable.js';
import { countActivity } from '../../compiler/activity/countActivity.js';
import { saif } from '../../compiler/activity/saif.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { type CompileOptions, type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import type { EngineName } from '../../compiler/engines.js';
import type { OutletPlan } from '../../compiler/run/outlets/outlet.js';
import { type RunRequest, runDesign } from '../../compiler/run/runDesign.js';
import type { RunRecorder, RunStart } from '../../compiler/run/runRecorder.js';
import { signalsOf } from '../../compiler/waveform/signalList.js';
import { vcdForm } from '../../compiler/waveform/vcd/vcdForm.js';
import type { WaveWindow } from '../../compiler/waveform/wave.js';
import { writeWave } from '../../compiler/waveform/writeWave.js';
import { rowStride } from '../../runtime/layout.js';
import { heldStimulus } from '../../runtime/stream.js';
import { designFrom } from '../support/ownCircuits.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';
import { readVcd } from '../waveform/readVcd.js';
import { readSaif } from './readSaif.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-activity-'));
afterAll(() => rmSync(folder, { recursive: true }));
const emitter = localEmitter();

const whole: WaveWindow = { from: 0, to: Number.POSITIVE_INFINITY };
const held = (design: Design, cycles: number) => ({
  stimulus: heldStimulus(design.layout, cycles),
  ...({ engine: 'wasm', powerUp: 'zero', seed: 0, emitter } as const),
});

interface Counting extends Omit<RunRequest, 'outlets'> {
  readonly window?: WaveWindow;
  readonly form?: 'saif' | 'csv' | 'picture';
  readonly nets?: readonly string[];
}

/** Runs a design and counts; returns what was written. */
async function counted(
  design: Design,
  { window = whole, form = 'saif', nets = [], ...request }: Counting,
) {
  const path = join(folder, `counts.${form}`);
  const write =
    form === 'csv' ? activityTable : (counts: Parameters<typeof saif>[0]) => saif(counts, '1');
  const { activity } = await runDesign(design, {
    ...request,
    outlets: [
      countActivity(design, {
        ...{ list: signalsOf(design.circuit, nets), window, emitter },
        ...(form === 'picture' ? { picture: path } : { file: { path, form: write } }),
      }),
    ],
  });
  return { text: readFileSync(path, 'utf8'), summary: activity! };
}

describe('a counter of three bits', () => {
  const design = designFrom(
    new Source(
      'count.v',
      `module count (input clk, output [2:0] n, output top, idle);
        reg [2:0] q = 0;
        always @(posedge clk) q <= q + 1;
        assign n = q, idle = 1'b0;
        not (top, q[2]);
      endmodule`,
    ),
  );

  /*
   * By hand: from 0 on, ten cycles show 0 1 2 3 4 5 6 7 0 1. Bit 0 is 0101010101: five times 1, and
   * it changes nine times between two cycles. Bit 1 is 0011001100: four times 1, changes at cycles
   * 2, 4, 6, 8. Bit 2 is 0000111100: four times 1, changes at 4 and 8. A cycle takes two units of
   * time; the clock is at 1 in one of them, and changes twice in each cycle.
   */
  it('does what it does by hand', async () => {
    const { text, summary } = await counted(design, held(design, 10));
    const { header, nets } = readSaif(text);
    expect(Object.fromEntries(header)).toEqual({
      ...{ SAIFVERSION: '2.0', DIRECTION: 'backward', DESIGN: 'count', DATE: '', VENDOR: '' },
      ...{ PROGRAM_NAME: 'Clockstride', VERSION: '1', DIVIDER: '/', TIMESCALE: '1 ns' },
      DURATION: '20',
    });
    const of = (T0: number, T1: number, TC: number) => ({ T0, T1, TX: 0, TC, IG: 0 });
    const names = ['clk', 'n[0]', 'n[1]', 'n[2]', 'top', 'idle', 'q[0]', 'q[1]', 'q[2]'];
    const expected = [
      of(10, 10, 20),
      ...[of(10, 10, 9), of(12, 8, 4), of(12, 8, 2)],
      ...[of(8, 12, 2), of(20, 0, 0)],
      ...[of(10, 10, 9), of(12, 8, 4), of(12, 8, 2)],
    ];
    const shown = names.map((name) => nets.get(`count.${name}`));
    expect(shown).toEqual(expected);
    expect(summary.cycles).toBe(10);
    expect(summary.still).toContain('idle');
  });

  it('is written as a table too, and equal runs give equal bytes', async () => {
    const table = await counted(design, { ...held(design, 10), form: 'csv', nets: ['n', 'clk'] });
    expect(table.text).toBe(
      'net,toggles,time_at_0,time_at_1,time_at_x\n' +
        'n[0],9,10,10,0\nn[1],4,12,8,0\nn[2],2,12,8,0\nclk,20,10,10,0\n',
    );
    const [one, other] = [
      await counted(design, held(design, 9)),
      await counted(design, held(design, 9)),
    ];
    expect(other.text).toBe(one.text);
  });

  it('counts on where a run goes on, as if it had not stopped', async () => {
    const start = await momentAt(design, 1000);
    const [one, other] = [
      await counted(design, { ...held(design, 2777), from: start, cycles: 2777 }),
      await counted(design, held(design, 2777)),
    ];
    expect(one.text).toBe(other.text);
    expect(one.summary).toEqual(other.summary);
  });

  // The bits change 299, 149 and 74 times in 300 cycles: 522 / (3 * 300) is 0.58.
  it('is drawn with its average, in ranges that get longer', async () => {
    const ranges = [
      [7, 'cycle by cycle'],
      [300, 'in ranges of 2 cycles'],
      [5000, 'in ranges of 32 cycles'],
    ] as const;
    for (const [cycles, length] of ranges) {
      const { text } = await counted(design, { ...held(design, cycles), form: 'picture' });
      expect(text).toContain(`cycles 0 to ${(cycles - 1).toLocaleString('en-US')}, ${length}`);
      if (cycles === 300) expect(text).toContain('>0.58<');
    }
  });
});

describe('blocks', () => {
  const design = designFrom(
    new Source(
      'two.v',
      `module half (input clk, output reg q = 0, output was);
        reg before = 0;
        always @(posedge clk) begin q <= ~q; before <= q; end
        assign was = before;
      endmodule
      module pair (input clk, output [1:0] q, was);
        half a (clk, q[0], was[0]);
        half b (clk, q[1], was[1]);
      endmodule`,
    ),
  );

  /*
   * By hand: in ten cycles q changes nine times, and what it was a cycle before eight times. The top
   * names both bits of both ports; `before` has a name in each half alone.
   */
  it('have the nets that nothing nearer to the top names', async () => {
    const { summary, text } = await counted(design, { ...held(design, 10), form: 'picture' });
    expect(summary.nets).toBe(6);
    expect(summary.busiestBlocks).toEqual([
      { name: 'pair', nets: 4, toggles: 9 + 9 + 8 + 8 },
      { name: 'a', nets: 1, toggles: 8 },
      { name: 'b', nets: 1, toggles: 8 },
    ]);
    for (const name of ['pair', 'a', 'b']) expect(text).toContain(`>${name}<`);
    const chosen = await counted(design, {
      ...{ ...held(design, 10), form: 'picture', nets: ['a.*', 'b.before', 'q'] },
    });
    expect(chosen.summary.busiestBlocks).toEqual([
      { name: 'pair', nets: 2, toggles: 18 },
      { name: 'a', nets: 2, toggles: 16 },
      { name: 'b', nets: 1, toggles: 8 },
    ]);
    const top = await counted(design, { ...held(design, 10), form: 'picture', nets: ['q', 'was'] });
    expect(top.text).toContain('>was<');
  });

  it('are counted up to the cycle in which a run ends', async () => {
    const list = signalsOf(design.circuit, []);
    const { activity } = await runDesign(design, {
      ...held(design, 1000),
      outlets: [stopAt(300), countActivity(design, { list, window: whole, emitter })],
    });
    expect(activity!.cycles).toBe(301);
  });
});

/** Ends a run after a cycle of its first block. */
const stopAt = (lastCycle: number): OutletPlan => ({
  open: () => ({
    wantsResponse: true,
    take: () => ({ lastCycle, reason: 'enough' }),
    finish: () => ({}),
    discard: () => undefined,
  }),
});

/** Where a run with counting stands after some cycles. */
async function momentAt(design: Design, cycles: number): Promise<RunStart> {
  let last: RunStart | undefined;
  const recorder: RunRecorder = {
    begin: async () => undefined,
    after: (moment) => void moment(),
    end: async (_, end) => {
      last = end;
      return [];
    },
  };
  const list = signalsOf(design.circuit, []);
  await runDesign(design, {
    ...held(design, cycles),
    recorder,
    outlets: [countActivity(design, { list, window: whole, emitter })],
  });
  return structuredClone(last!);
}

describe('counts are those of the value change dump of the same window', () => {
  const holdsFor = (options: RandomCircuitOptions, compile: CompileOptions, engine: EngineName) =>
    fc.assert(
      fc.asyncProperty(randomCircuit(options), fc.nat(200), fc.nat(350), fc.nat(1e6), (...chosen) =>
        sameAsDump(compile, engine, ...chosen),
      ),
      { seed: 20261201, numRuns: 4 },
    );

  it('with gated clocks, latches and asynchronous pins', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true, maxWidth: 9 }, {}, 'wasm'));
  it('with both edges, interpreted', () => holdsFor({ clocking: 'edges' }, {}, 'bytecode'));
  it('with divided clocks, by the reference', () =>
    holdsFor({ clocking: 'divided' }, {}, 'reference'));
  it('with loops and x', () =>
    holdsFor(
      { loops: true, latches: true, unknowns: true, maxGates: 25 },
      { threeValued: true },
      'wasm',
    ));
  it('with memories and x', () =>
    holdsFor({ memories: true, unknowns: true }, { threeValued: true }, 'bytecode'));
  it('with clocks that tick each at its own pace', () => {
    const timings = [
      { port: 'clk', period: 4, offset: 1 },
      { port: 'clk2', period: 6, offset: 3 },
    ];
    return holdsFor({ clocking: 'twoClocks' }, { timings }, 'wasm');
  });
});

async function sameAsDump(
  compile: CompileOptions,
  engine: EngineName,
  circuit: Circuit,
  from: number,
  length: number,
  seed: number,
) {
  const design = timed(circuit, compile);
  if (design === undefined) return;
  const { layout } = design;
  const cycles = from + length + 1;
  const window = { from, to: from + length };
  const rows = randomRows(layout, seed, cycles);
  const list = signalsOf(circuit, []);
  const paths = { dump: join(folder, 'dump.vcd'), saif: join(folder, 'dump.saif') };
  const file = {
    path: paths.saif,
    form: (counts: Parameters<typeof saif>[0]) => saif(counts, '1'),
  };
  await runDesign(design, {
    stimulus: [{ cycles, rows, stride: rowStride(layout.inputs, layout.threeValued) }],
    ...{ engine, powerUp: layout.threeValued ? 'unknown' : 'random', seed, emitter },
    outlets: [
      writeWave(paths.dump, vcdForm, list, window),
      countActivity(design, { list, window, file, emitter }),
    ],
  });
  const { nets, header } = readSaif(readFileSync(paths.saif, 'utf8'));
  const duration = Number(header.get('DURATION'));
  for (const [name, counts] of dumpCounts(readFileSync(paths.dump, 'utf8'))) {
    expect([name, nets.get(name)]).toEqual([name, counts]);
    expect(counts.T0 + counts.T1 + counts.TX).toBe(duration);
  }
}

// The second clock is there only where a register hangs on it.
function timed(circuit: Circuit, options: CompileOptions): Design | undefined {
  try {
    return designOf(circuit, options);
  } catch (error) {
    if (error instanceof RangeError) return undefined;
    throw error;
  }
}

/** What every bit of every variable of a dump does; names as in a SAIF file, by path. */
function dumpCounts(text: string) {
  const { variables, times, valueAt } = readVcd(text);
  const counts = new Map<string, { T0: number; T1: number; TX: number; TC: number; IG: 0 }>();
  for (const { name, code, width, range } of variables) {
    const values = times.map((time) => valueAt(code, time));
    const [, left, right = left] = /^\[(-?\d+)(?::(-?\d+))?\]$/.exec(range) ?? [];
    for (let bit = 0; bit < width; bit++) {
      const index =
        left === undefined
          ? ''
          : `[${Number(left) + Math.sign(Number(right) - Number(left)) * bit}]`;
      const at = (i: number) => values[i]![bit]!;
      const count = { T0: 0, T1: 0, TX: 0, TC: 0, IG: 0 as const };
      for (let i = 0; i + 1 < times.length; i++) {
        const kind = `T${at(i).toUpperCase()}` as 'T0' | 'T1' | 'TX';
        count[kind] += times[i + 1]! - times[i]!;
        if (at(i) !== at(i + 1) && at(i) !== 'x' && at(i + 1) !== 'x') count.TC++;
      }
      counts.set(name + index, count);
    }
  }
  return counts;
}
