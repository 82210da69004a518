import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { engineNames } from '../../compiler/engines.js';
import type { StatesSummary } from '../../compiler/run/outlets/statesSummary.js';
import { statesLines } from '../../compiler/run/outlets/statesSummary.js';
import { type RunRequest, runDesign } from '../../compiler/run/runDesign.js';
import type { RunRecorder, RunStart } from '../../compiler/run/runRecorder.js';
import { followStates } from '../../compiler/states/followStates.js';
import { statesPicture } from '../../compiler/states/picture/statesPicture.js';
import { StateCourse } from '../../compiler/states/stateCourse.js';
import { statesGraph } from '../../compiler/states/statesGraph.js';
import { statesTable } from '../../compiler/states/statesTable.js';
import { stateVectors } from '../../compiler/states/stateVectors.js';
import { signalName, signalsOf } from '../../compiler/waveform/signalList.js';
import { rowStride } from '../../runtime/layout.js';
import { formatValue } from '../../runtime/valueText.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';
import { allVisible } from '../waveform/allVisible.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-states-'));
afterAll(() => rmSync(folder, { recursive: true }));
const emitter = localEmitter();

/** Runs packed rows and follows; `more` changes the request. */
async function followed(
  design: Design,
  registers: readonly string[],
  rows: Uint32Array,
  cycles: number,
  more: Partial<RunRequest> = {},
) {
  const { inputs, threeValued } = design.layout;
  const stride = rowStride(inputs, threeValued);
  const vectors = stateVectors(design.circuit, registers);
  return runDesign(design, {
    stimulus: [{ cycles, rows, stride }],
    ...{ engine: 'wasm', powerUp: threeValued ? 'unknown' : 'zero', seed: 0, emitter },
    outlets: [
      followStates(vectors, [
        { path: join(folder, 's.csv'), write: (_, __, all) => statesTable(all) },
      ]),
    ],
    ...more,
  });
}

/*
 * A pump: 0 off, 1 starting, 2 running, 3 locked. It starts when wanted, runs after a cycle, stops
 * when it is not wanted, and is locked by a fault while running, for good.
 */
const pump = designFrom(
  new Source(
    'pump.v',
    `module pump (input clk, wanted, fault, output on);
      reg [1:0] phase = 0;
      always @(posedge clk)
        case (phase)
          0: if (wanted) phase <= 1;
          1: phase <= 2;
          2: phase <= fault ? 3 : wanted ? 2 : 0;
          default: phase <= 3;
        endcase
      assign on = phase == 2;
    endmodule`,
  ),
);

/** The same with names for the phases, in an instance; LOCKED is beside another name of one code. */
const namedPump = designFrom(
  new Source(
    'pump.v',
    `module named (input clk, wanted, fault, output on, near);
      parameter LOW = 2;
      localparam [1:0] OFF = 0, START = 1, RUN = 2'd2;
      localparam LOCKED = 3, BROKEN = 3;
      reg [1:0] phase = OFF;
      always @(posedge clk)
        case (phase)
          OFF: if (wanted) phase <= START;
          START: phase <= RUN;
          default: phase <= fault || phase == BROKEN ? LOCKED : wanted ? RUN : OFF;
        endcase
      assign on = phase == RUN;
      reg [2:0] count = 0;
      always @(posedge clk) if (count == LOW) count <= 0; else count <= count + 1;
      assign near = count[0];
    endmodule
    module pump (input clk, wanted, fault, output on, near);
      named p (clk, wanted, fault, on, near);
    endmodule`,
  ),
);

// Bit 0 is `wanted`, bit 1 `fault`. Cycle by cycle, from phase 0 on, by hand:
// wanted 0 1 1 1 0 0 1 1 1 1 1 1
// fault  0 0 0 0 0 0 0 0 0 1 0 0
// phase  0 0 1 2 2 0 0 1 2 2 3 3
const course = Uint32Array.of(0, 1, 1, 1, 0, 0, 1, 1, 1, 3, 1, 1);
const byHand: StatesSummary = {
  register: 'phase',
  states: [
    { value: '0x0', cycles: 4, first: 0 },
    { value: '0x1', cycles: 2, first: 2 },
    { value: '0x2', cycles: 4, first: 3 },
    { value: '0x3', cycles: 2, first: 10 },
  ],
  transitions: [
    { from: '0x0', to: '0x0', count: 2, first: 1 },
    { from: '0x0', to: '0x1', count: 2, first: 2 },
    { from: '0x1', to: '0x2', count: 2, first: 3 },
    { from: '0x2', to: '0x2', count: 2, first: 4 },
    { from: '0x2', to: '0x0', count: 1, first: 5 },
    { from: '0x2', to: '0x3', count: 1, first: 10 },
    { from: '0x3', to: '0x3', count: 1, first: 11 },
  ],
};

describe('the states of a small machine', () => {
  it.each(engineNames)('are those found by hand, engine %s', async (engine) => {
    const { states, notes } = await followed(pump, ['phase'], course, 12, { engine });
    expect(states).toEqual([byHand]);
    expect(notes).toEqual([]);
  });

  it('are told by the names that the text has for their codes, where these have one', async () => {
    const names: Record<string, string> = { '0x0': 'OFF', '0x1': 'START', '0x2': 'RUN' };
    const named = (value: string): string => names[value] ?? value;
    const { states } = await followed(namedPump, ['p.phase', 'p.count'], course, 12);
    expect(states![0]).toEqual({
      register: 'p.phase',
      states: byHand.states.map((state) => ({ ...state, value: named(state.value) })),
      transitions: byHand.transitions.map((each) => ({
        ...{ ...each, from: named(each.from), to: named(each.to) },
      })),
    });
    // A limit alone names no states.
    expect(states![1]!.states.map(({ value }) => value)).toEqual(['0x0', '0x1', '0x2']);
    expect(readFileSync(join(folder, 's.csv'), 'utf8')).toContain('\np.phase,OFF,START,2,2\n');
    expect(statesGraph('pump', states!)).toContain('[label="RUN\\n4 cycles"]');
  });

  it('are written as a table and told in the summary', async () => {
    await followed(pump, ['phase'], course, 5);
    expect(readFileSync(join(folder, 's.csv'), 'utf8')).toBe(
      'register,state,next,count,first_cycle\n' +
        'phase,0x0,,2,0\nphase,0x0,0x0,1,1\nphase,0x0,0x1,1,2\n' +
        'phase,0x1,,1,2\nphase,0x1,0x2,1,3\nphase,0x2,,2,3\nphase,0x2,0x2,1,4\n',
    );
    expect(statesLines([byHand])).toEqual([
      'phase: 4 states, 7 transitions',
      '  state  first cycle  cycles  next: times (first cycle)',
      '  0x0              0       4  0x0: 2 (1), 0x1: 2 (2)',
      '  0x1              2       2  0x2: 2 (3)',
      '  0x2              3       4  0x2: 2 (4), 0x0: 1 (5), 0x3: 1 (10)',
      '  0x3             10       2  0x3: 1 (11)',
    ]);
  });

  it('are followed on where a run goes on, as if it had not stopped', async () => {
    for (const cycles of [1, 4, 5, 11]) {
      const from = await momentAt(cycles);
      const rest = await followed(pump, ['phase'], course.subarray(cycles), 12 - cycles, { from });
      expect(rest.states).toEqual([byHand]);
    }
  });

  it('are drawn, all of them', async () => {
    const dot = statesGraph('pump', [byHand]);
    for (const { value } of byHand.states) expect(dot).toContain(`label="${value}\\n`);
    expect(dot.match(/->/g)).toHaveLength(7);
    const svg = await statesPicture('pump', 12, [byHand]);
    expect(svg.match(/class="node state/g)).toHaveLength(4);
    expect(svg.match(/class="edge move/g)).toHaveLength(7);
    expect(svg.match(/class="edge move stay"/g)).toHaveLength(3);
    expect(svg).toContain('States of pump');
    expect(svg).not.toContain('<!DOCTYPE');
  });

  it('are those of several registers joined in braces, the first most significant', async () => {
    const { states } = await followed(pump, ['{on, phase}', 'phase[0]'], course, 12);
    expect(states!.map(({ register }) => register)).toEqual(['{on, phase}', 'phase[0]']);
    expect(states![0]!.states.map(({ value }) => value)).toEqual(['0x0', '0x1', '0x6', '0x3']);
    expect(states![1]!.states.map(({ value, cycles }) => [value, cycles])).toEqual([
      ['0', 8],
      ['1', 4],
    ]);
  });
});

async function momentAt(cycles: number): Promise<RunStart> {
  let last: RunStart | undefined;
  const recorder: RunRecorder = {
    begin: async () => undefined,
    after: (moment) => void moment(),
    end: async (_, end) => {
      last = end;
      return [];
    },
  };
  await followed(pump, ['phase'], course, cycles, { recorder });
  return structuredClone(last!);
}

describe('states', () => {
  it('that are x are states of their own', async () => {
    const design = designOf(pump.circuit, { threeValued: true });
    // Phase starts at 0; `wanted` is x in cycle 1.
    const rows = Uint32Array.of(0, 0, 0, 1, 0, 0, 0, 0);
    const { states } = await followed(design, ['phase'], rows, 4);
    expect(states![0]!.states.map(({ value }) => value)).toEqual(['0x0', '0b0x', '0bxx']);
  });

  it('of a one-hot register have one bit each', async () => {
    const design = ownDesign('lock');
    const rows = randomRows(design.layout, 3, 4000).map((row) => row & ~1);
    rows[0]! |= 1;
    const { states } = await followed(design, ['state'], rows, 4000);
    const values = states![0]!.states.map(({ value }) => Number(value));
    expect(values.length).toBeGreaterThan(3);
    for (const value of values) expect(Math.log2(value) % 1).toBe(0);
    // Each state, but for the first, is entered from another one as often as it is left, or once more.
    for (const [i, { value }] of states![0]!.states.entries()) {
      const moves = states![0]!.transitions.filter(({ from, to }) => from !== to);
      const sum = (end: 'from' | 'to') =>
        moves.filter((move) => move[end] === value).reduce((all, { count }) => all + count, 0);
      expect(Math.abs(sum('to') + (i === 0 ? 1 : 0) - sum('from') - 0.5)).toBe(0.5);
    }
  });

  it('beyond what is kept end the following, and a note says so', async () => {
    const text = `module wide (input clk, output reg [15:0] n = 0);
      always @(posedge clk) n <= n + 3;
    endmodule`;
    const design = designFrom(new Source('wide.v', text));
    const { states, notes } = await followed(design, ['n'], new Uint32Array(0), 6000);
    expect(states![0]!.states.length).toBe(4096);
    expect(notes[0]).toContain('n has more than 4,096 states');
    expect(notes[0]).toContain('up to cycle 4,095;');
    expect(states![0]!.followedTo).toBe(4095);
    const svg = await statesPicture('wide', 6000, states!);
    expect(svg.match(/class="node state/g)).toHaveLength(120);
    expect(svg).toContain('the first ones of more than can be drawn');
  });

  it('beyond the transitions that are kept are not told of', () => {
    // All 65,536 pairs of 256 states (the sequence of de Bruijn, 1946), then one more state.
    const rows: number[] = [];
    for (let i = 0; i < 256; i++) {
      rows.push(i);
      for (let j = i + 1; j < 256; j++) rows.push(i, j);
    }
    rows.push(0, 256);
    const place = { firstWord: 0, flagWord: 0, flagBit: 0, stride: 1, toUnknown: undefined };
    const stateCourse = new StateCourse({ name: 'n', nets: new Uint32Array(9) }, 0, place);
    const watched = Uint32Array.from(rows);
    const none = { rows: watched, stimulus: watched, stimulusStride: 0 };
    stateCourse.take({ firstCycle: 0, cycles: rows.length, watched, ...none });
    const { states, transitions, followedTo } = stateCourse.summary();
    expect(followedTo).toBe(65_536);
    expect([states.length, transitions.length]).toEqual([256, 65_536]);
    expect(states.reduce((sum, { cycles }) => sum + cycles, 0)).toBe(65_537);
  });

  it('joined in braces want both of them', () => {
    expect(() => stateVectors(pump.circuit, ['{on, phase'])).toThrow(
      '{on, phase: the } is missing',
    );
  });

  it('are what the reference sees, in any circuit', () =>
    fc.assert(
      fc.asyncProperty(
        randomCircuit({ clocking: 'gated', unknowns: true, maxWidth: 40 }),
        fc.boolean(),
        fc.nat(1e6),
        async (circuit, threeValued, seed) => {
          const design = designOf(circuit, { threeValued });
          const cycles = 60;
          const list = signalsOf(circuit, []);
          // Several, so that some stand across two words of a row.
          const entries = Array.from({ length: Math.min(12, list.count) }, (_, i) => i);
          const names = entries.map((entry) => signalName(circuit.hierarchy, list, entry));
          const rows = randomRows(design.layout, seed, cycles);
          const { states } = await followed(design, names, rows, cycles);
          const powerUp = powerUpState(circuit, threeValued ? 'unknown' : 'zero', 0);
          const values = allVisible(design, powerUp, rows, cycles);
          for (const entry of entries) {
            const start = list.place[entry]!;
            const nets = list.nets.subarray(start, start + list.width[entry]!);
            const texts = Array.from({ length: cycles }, (_, cycle) =>
              textOf(Array.from(nets, (net) => values(cycle, net))),
            );
            expect(states![entry]).toEqual(summaryOf(names[entry]!, texts));
          }
        },
      ),
      { seed: 20261202, numRuns: 6 },
    ));
});

/** Bits, least significant first, as a response table has them. */
function textOf(bits: readonly string[]): string {
  const words = new Uint32Array(2 * Math.ceil(bits.length / 32));
  const half = words.length / 2;
  bits.forEach((bit, i) => {
    if (bit !== '0') words[(bit === 'x' ? half : 0) + (i >>> 5)]! |= 1 << (i & 31);
  });
  return formatValue({ offset: 0, width: bits.length }, words, 0, half);
}

/** The same summary by looking through the whole course again and again. */
function summaryOf(register: string, course: readonly string[]): StatesSummary {
  const steps = course.slice(1).map((to, i) => ({ from: course[i]!, to }));
  const isSame = (a: (typeof steps)[0], b: (typeof steps)[0]) => a.from === b.from && a.to === b.to;
  return {
    register,
    states: [...new Set(course)].map((value) => ({
      value,
      cycles: course.filter((each) => each === value).length,
      first: course.indexOf(value),
    })),
    transitions: steps
      .filter((step, i) => steps.findIndex((each) => isSame(each, step)) === i)
      .map((step) => ({
        ...step,
        count: steps.filter((each) => isSame(each, step)).length,
        first: steps.findIndex((each) => isSame(each, step)) + 1,
      })),
  };
}
