import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import { type SignalList, signalAt, signalsOf } from '../../compiler/waveform/signalList.js';
import { vcdForm } from '../../compiler/waveform/vcd/vcdForm.js';
import type { WaveWindow } from '../../compiler/waveform/wave.js';
import { writeWave } from '../../compiler/waveform/writeWave.js';
import { rowStride } from '../../runtime/layout.js';
import { openStimulus } from '../../runtime/node/index.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';
import { allVisible } from './allVisible.js';
import { readVcd, type Vcd, type VcdVariable } from './readVcd.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-waves-'));
afterAll(() => rmSync(folder, { recursive: true }));

const SEED = 20260418;
const CYCLES = 30;

/** Runs random stimulus and reads back the dump that comes of it. */
async function dumpOf(design: Design, list: SignalList, window: WaveWindow, seed: number) {
  const { layout, circuit } = design;
  const rows = randomRows(layout, seed, CYCLES);
  const path = join(folder, 'waves.vcd');
  const stride = rowStride(layout.inputs, layout.threeValued);
  const powerUp = layout.threeValued ? 'unknown' : 'random';
  await runDesign(design, {
    stimulus: [{ cycles: CYCLES, rows, stride }],
    ...{ engine: 'wasm', powerUp, seed },
    outlets: [writeWave(path, vcdForm, list, window)],
  });
  const text = readFileSync(path, 'utf8');
  const values = allVisible(design, powerUpState(circuit, powerUp, seed), rows, CYCLES);
  return { text, vcd: readVcd(text), values, rows };
}

/** The variable of each signal of a list: they stand in the order of scopes. */
function variablesOf({ circuit }: Design, list: SignalList, { variables }: Vcd): VcdVariable[] {
  const { hierarchy } = circuit;
  const names = Array.from(list.scope, (scope, entry) => {
    const path: string[] = [signalAt(hierarchy, scope, list.signal[entry]!).name];
    for (let s = scope; s !== 0; s = hierarchy.scopeParent[s]!) {
      path.unshift(hierarchy.scopeNames.at(s)!);
    }
    return [circuit.name, ...path].join('.');
  });
  expect(variables.map(({ name }) => name).sort()).toEqual([...names].sort());
  return names.map((name) => variables.find((variable) => variable.name === name)!);
}

/** Expects every bit of every signal to be what the reference says, when outputs are sampled. */
function expectSame(
  design: Design,
  list: SignalList,
  { vcd, values }: Awaited<ReturnType<typeof dumpOf>>,
  { from, to }: WaveWindow,
  timeOf: (cycle: number) => number,
) {
  const variables = variablesOf(design, list, vcd);
  for (let cycle = from; cycle <= Math.min(to, CYCLES - 1); cycle++) {
    const shown = variables.map(({ code }) => vcd.valueAt(code, timeOf(cycle)));
    const expected = variables.map((_, entry) => {
      const start = list.place[entry]!;
      const nets = list.nets.subarray(start, start + list.width[entry]!);
      return Array.from(nets, (net) => values(cycle, net))
        .reverse()
        .join('');
    });
    expect(shown, `cycle ${cycle}`).toEqual(expected);
  }
}

async function holdsFor(circuits: fc.Arbitrary<Circuit>, threeValued: boolean, numRuns: number) {
  await fc.assert(
    fc.asyncProperty(
      circuits,
      fc.nat(CYCLES - 1),
      fc.nat(CYCLES),
      fc.nat(1e6),
      async (circuit, from, length, seed) => {
        const design = designOf(circuit, { threeValued });
        const list = signalsOf(circuit, []);
        const window = { from, to: from + length };
        const dump = await dumpOf(design, list, window, seed);
        expectSame(design, list, dump, window, (cycle) => 2 * cycle);
      },
    ),
    { seed: SEED, numRuns },
  );
}

describe('a dump of any window shows every net as the reference sees it', () => {
  it('with gated clocks, latches and asynchronous pins', () =>
    holdsFor(
      randomCircuit({ clocking: 'gated', latches: true, asynchronous: true, maxWidth: 9 }),
      false,
      10,
    ));
  it('with divided clocks', () => holdsFor(randomCircuit({ clocking: 'divided' }), false, 8));
  it('with combinational loops', () =>
    holdsFor(randomCircuit({ loops: true, latches: true, maxGates: 15 }), true, 8));
  it('with three values', () =>
    holdsFor(randomCircuit({ unknowns: true, asynchronous: true, maxWidth: 9 }), true, 10));

  it('in a hierarchy, by names of their own', async () => {
    const design = ownDesign('lock');
    const list = signalsOf(design.circuit, []);
    const window = { from: 7, to: 21 };
    const dump = await dumpOf(design, list, window, 5);
    expectSame(design, list, dump, window, (cycle) => 2 * cycle);
    const names = dump.vcd.variables.map(({ name, range }) => name + range);
    expect(names).toContain('lock.state[8:0]');
    expect(names).toContain('lock.ff_timer_11.q');
  });

  it('with clocks of their own pace, between the edges', async () => {
    const timings = [
      { port: 'clk', period: 4, offset: 1 },
      { port: 'clk2', period: 6, offset: 3 },
    ];
    const circuits = fc.sample(randomCircuit({ clocking: 'twoClocks' }), {
      seed: SEED,
      numRuns: 6,
    });
    for (const circuit of circuits) {
      const design = designOf(circuit, { timings });
      const list = signalsOf(circuit, []);
      const window = { from: 3, to: 17 };
      const dump = await dumpOf(design, list, window, 9);
      expectSame(design, list, dump, window, (cycle) => 2 * (4 * cycle + 1));
      const clock = dump.vcd.variables.find(({ name }) => name.endsWith('.clk2'))!;
      // Active from tick 3, 9, 15 … on for three ticks; a tick is two units, the edge in its middle.
      const levels = Array.from({ length: 12 }, (_, tick) =>
        dump.vcd.valueAt(clock.code, 2 * (18 + tick) + 1),
      );
      const { inactive } = design.clocks.ports.find(({ name }) => name === 'clk2')!;
      expect(levels.join('')).toBe(inactive === 0 ? '000111000111' : '111000111000');
    }
  });
});

describe('a dump', () => {
  it('is a stimulus that gives the same inputs', async () => {
    const design = ownDesign('lock');
    const list = signalsOf(design.circuit, ['*']);
    const { rows } = await dumpOf(design, list, { from: 4, to: CYCLES }, 3);
    const bit = 0;
    const [clock] = design.clocks.ports;
    const port = { name: clock!.name, width: 1, msb: 0, lsb: 0, isVector: false };
    const source = await openStimulus(join(folder, 'waves.vcd'), design.layout, {
      clocks: [{ port, bit, active: 1 }],
    });
    const read: number[] = [];
    for await (const block of source.blocks()) {
      for (let row = 0; row < block.cycles; row++) read.push(block.rows[row * block.stride]!);
    }
    expect(read).toEqual(Array.from(rows.subarray(4, CYCLES)));
  });

  it('moves clocks and copies of them at their edges', async () => {
    const design = designFrom(
      new Source(
        'copy.v',
        `module copy(input clk, input d, output reg q, output n);
           wire c1, c2; buf b(c1, clk); not i(c2, c1); assign n = c2;
           always @(posedge c1) q <= d;
         endmodule`,
      ),
    );
    const { vcd } = await dumpOf(design, signalsOf(design.circuit, []), { from: 2, to: 4 }, 1);
    const levels = (name: string): string => {
      const { code } = vcd.variables.find((variable) => variable.name === `copy.${name}`)!;
      return [4, 5, 6, 7, 8, 9, 10].map((time) => vcd.valueAt(code, time)).join('');
    };
    expect(levels('clk')).toBe('0101010');
    expect(levels('c1')).toBe('0101010');
    expect(levels('c2')).toBe('1010101');
  });

  it('writes names that are no simple identifiers as escaped ones', async () => {
    const design = designFrom(
      new Source(
        'odd.v',
        'module odd(input clk, input \\a.b , output reg \\2+q ); always @(posedge clk) \\2+q <= \\a.b ; endmodule',
      ),
    );
    const { vcd, text } = await dumpOf(
      design,
      signalsOf(design.circuit, []),
      { from: 0, to: 2 },
      1,
    );
    expect(text).toContain('\\a.b $end');
    expect(vcd.variables.map(({ name }) => name)).toEqual(['odd.clk', 'odd.a.b', 'odd.2+q']);
  });

  it('does not appear where no cycle of the window is run', async () => {
    const design = ownDesign('lock');
    const summary = await runDesign(design, {
      stimulus: [],
      ...{ cycles: 5, engine: 'bytecode', powerUp: 'zero', seed: 0 },
      outlets: [
        writeWave(join(folder, 'late.vcd'), vcdForm, signalsOf(design.circuit, ['state']), {
          from: 9,
          to: 12,
        }),
      ],
    });
    expect(summary.notes).toEqual(['no cycle was run from cycle 9 on; no waves to write']);
    expect(() => readFileSync(join(folder, 'late.vcd'))).toThrow('ENOENT');
  });
});
