import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf, programsOf } from '../../compiler/compile.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import {
  MOST_HELD_CYCLES,
  MOST_LANES,
  QUIET_CYCLES,
  settleDesign,
} from '../../compiler/settle/settleDesign.js';
import type { ElementReport, SettleReport } from '../../compiler/settle/settleReport.js';
import { type Engine, RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import type { StimulusBlock } from '../../runtime/stream.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';
import { smallCircuit } from '../support/smallCircuit.js';

const SEED = 20260813;

/** A stimulus of random rows for some cycles. */
function randomStimulus({ layout }: Design, seed: number, cycles: number): StimulusBlock[] {
  const rows = randomRows(layout, seed, cycles);
  return cycles === 0 ? [] : [{ cycles, rows, stride: layout.inputs.words }];
}

/** The states of an engine from power-up on, after each cycle; up to one without result. */
function statesOf(engine: Engine, start: Uint8Array, stimulus: readonly StimulusBlock[]) {
  engine.reset(start);
  const states = [start];
  const { inputs, threeValued } = engine.layout;
  const row = new Uint32Array(rowStride(inputs, threeValued));
  try {
    for (const { cycles, rows, stride } of stimulus) {
      for (let cycle = 0; cycle < cycles; cycle++) {
        row.set(rows.subarray(cycle * stride, cycle * stride + inputs.words));
        engine.run(1, row, 0, undefined);
        states.push(engine.state());
      }
    }
  } catch (error) {
    if (!(error instanceof RunFault)) throw error;
  }
  return states;
}

/** The report's words on each element, found out from every power-up there is. */
function bruteForce(design: Design, stimulus: readonly StimulusBlock[], cycles: number) {
  const { circuit, layout } = design;
  const threeValued = { ...layout, threeValued: true };
  const unknown = powerUpState(circuit, 'unknown');
  const free = Array.from(unknown.keys()).filter((element) => unknown[element] === 2);
  const known = statesOf(
    new ReferenceEngine(circuit, { ...design, layout: threeValued }),
    unknown,
    stimulus,
  );
  const courses = Array.from({ length: 2 ** free.length }, (_, powerUp) => {
    const start = unknown.slice();
    free.forEach((element, i) => {
      start[element] = (powerUp >>> i) & 1;
    });
    return statesOf(new ReferenceEngine(circuit, design), start, stimulus);
  });
  return layout.stateNames.map((name, element) => {
    let knownAfter = 0;
    let agreedAfter = 0;
    for (let after = 0; after <= cycles; after++) {
      if (known[after]![element] === 2) knownAfter = after + 1;
      const values = new Set(courses.flatMap((states) => states[after]?.[element] ?? []));
      if (values.size > 1) agreedAfter = after + 1;
    }
    if (agreedAfter > cycles) return { name, verdict: 'powerUp' };
    if (knownAfter <= cycles) return { name, verdict: 'known', knownAfter, agreedAfter };
    const isAnyLeft = courses.some((states) => states.length > cycles);
    return isAnyLeft ? { name, verdict: 'agreed', agreedAfter } : { name, verdict: 'undecided' };
  });
}

const wordsOf = (report: SettleReport) =>
  report.elements.map(({ name, verdict, knownAfter, agreedAfter }) => ({
    name,
    verdict,
    ...(verdict === 'known' && { knownAfter }),
    ...((verdict === 'known' || verdict === 'agreed') && { agreedAfter }),
  }));

const small = { maxRegisters: 5, maxGates: 14, maxInputs: 2, latches: false } as const;

describe('a report', () => {
  it('says of each element what all power-ups there are say', async () => {
    const seen = new Set<string>();
    const circuits = fc.oneof(
      randomCircuit({ ...small, asynchronous: true }),
      randomCircuit({ ...small, loops: true, maxGates: 8, maxRegisters: 3 }),
      randomCircuit({ ...small, clocking: 'gated', maxRegisters: 3 }),
    );
    await fc.assert(
      fc.asyncProperty(circuits, fc.nat(1e6), fc.nat(8), async (circuit, seed, cycles) => {
        const design = designOf(circuit);
        fc.pre(design.layout.stateNames.length <= 6);
        const stimulus = randomStimulus(design, seed, cycles);
        // So many lanes draw each of 64 power-ups.
        const report = await settleDesign(design, { stimulus, cycles, lanes: 1024, seed });
        expect(wordsOf(report)).toEqual(bruteForce(design, stimulus, cycles));
        for (const { verdict } of report.elements) seen.add(verdict);
      }),
      { seed: SEED, numRuns: 40 },
    );
    expect([...seen].sort()).toEqual(['agreed', 'known', 'powerUp', 'undecided']);
  });

  it('has witnesses that engines confirm from the seeds and from the power-ups it gives', async () => {
    let confirmed = 0;
    await fc.assert(
      fc.asyncProperty(
        randomCircuit({ maxRegisters: 20, latches: true }),
        fc.bigInt({ min: 0n, max: (1n << 64n) - 1n }),
        async (circuit, seed) => {
          const design = designOf(circuit);
          const stimulus = randomStimulus(design, 5, 12);
          const report = await settleDesign(design, { stimulus, lanes: 40, seed });
          const block = stimulus[0]!;
          const last = block.rows.slice(11 * block.stride);
          const held = { cycles: report.cycles - 12, rows: last, stride: 0 };
          const courses = new Map(
            report.powerUps.map((powerUp) => {
              const start = powerUpState(circuit, 'random', BigInt(powerUp.seed));
              expect(start.join('')).toBe(powerUp.state);
              expect(BigInt(powerUp.seed)).toBe(BigInt.asUintN(64, seed + BigInt(powerUp.lane)));
              const engine = new BytecodeEngine(programsOf(design), design.layout);
              return [powerUp.lane, statesOf(engine, start, [block, held])];
            }),
          );
          report.elements.forEach(({ witness, verdict }, element) => {
            expect(witness !== undefined).toBe(verdict === 'powerUp');
            if (witness === undefined) return;
            confirmed++;
            const values = witness.lanes.map((lane) => courses.get(lane)![witness.after]![element]);
            expect(values).toEqual(witness.values);
            expect(values[0]).not.toBe(values[1]);
          });
        },
      ),
      { seed: SEED + 1, numRuns: 25 },
    );
    expect(confirmed).toBeGreaterThan(20);
  });

  it('stays as it is in further cycles, where it says that the states come again', async () => {
    let repeated = 0;
    const verdictsOf = (report: SettleReport) =>
      wordsOf(report).map(({ agreedAfter: _, ...rest }) => rest);
    await fc.assert(
      fc.asyncProperty(
        randomCircuit({ asynchronous: true, maxRegisters: 6 }),
        fc.nat(1e6),
        fc.integer({ min: 1, max: 40 }),
        async (circuit, seed, further) => {
          const design = designOf(circuit);
          const stimulus = randomStimulus(design, seed, 6);
          const report = await settleDesign(design, { stimulus, lanes: 16, seed });
          if (!report.unknown.held || !report.differing.held) return;
          if (report.unknown.held.kind === 'repeats') repeated++;
          const cycles = report.cycles + further;
          const later = await settleDesign(design, { stimulus, cycles, lanes: 16, seed });
          expect(verdictsOf(later)).toEqual(verdictsOf(report));
        },
      ),
      { seed: SEED + 2, numRuns: 50 },
    );
    expect(repeated).toBeGreaterThan(3);
  });
});

const settled = (circuit: Circuit, more: Partial<Parameters<typeof settleDesign>[1]> = {}) =>
  settleDesign(designOf(circuit), { stimulus: [], lanes: 128, seed: 0, ...more });

const byName = (report: SettleReport): Record<string, ElementReport> =>
  Object.fromEntries(report.elements.map((element) => [element.name, element]));

/** A counter of some bits that starts at 0: bits and the gates in front of them. */
function counter(bits: number) {
  const gates: Record<string, string> = {};
  const registers: Record<string, { clock: string; data: string; initial: number }> = {};
  for (let i = 0; i < bits; i++) {
    gates[`d${i}`] = i === 0 ? 'not c0' : `xor c${i} ${i === 1 ? 'c0' : `a${i}`}`;
    if (i > 1) gates[`a${i}`] = `and c${i - 1} ${i === 2 ? 'c0' : `a${i - 1}`}`;
    registers[`c${i}`] = { clock: 'clk', data: `d${i}`, initial: 0 };
  }
  return { gates, registers };
}

describe('a verdict', () => {
  // `same` is 0 whatever `free` is, which three values cannot see; `chain` is known in two cycles.
  const circuit = smallCircuit({
    inputs: ['clk', 'i'],
    outputs: ['same'],
    gates: { n: 'not free', zero: 'and n free' },
    registers: {
      free: { clock: 'clk', data: 'free' },
      same: { clock: 'clk', data: 'zero' },
      given: { clock: 'clk', data: 'given', initial: 1 },
      first: { clock: 'clk', data: 'i' },
      chain: { clock: 'clk', data: 'first' },
    },
  });

  it('tells what is known, what pessimism hides and what power-up decides', async () => {
    const report = await settled(circuit);
    expect(report.counts).toEqual({ known: 3, agreed: 1, powerUp: 1, undecided: 0 });
    const { free, same, given, first, chain } = byName(report);
    expect(free).toEqual({
      name: 'free',
      kind: 'register',
      verdict: 'powerUp',
      witness: { lanes: expect.any(Array), values: expect.any(Array), after: report.cycles },
    });
    expect(same).toEqual({
      ...{ name: 'same', kind: 'register', verdict: 'agreed', agreedAfter: 1, value: 0 },
    });
    expect(given).toMatchObject({ verdict: 'known', knownAfter: 0, agreedAfter: 0, value: 1 });
    expect(first).toMatchObject({ verdict: 'known', knownAfter: 1, value: 0 });
    expect(chain).toMatchObject({ verdict: 'known', knownAfter: 2, value: 0 });
    expect(report.unknown.steps).toEqual([
      [0, 4],
      [1, 3],
      [2, 2],
    ]);
    expect(report.differing.steps).toEqual([
      [0, 4],
      [1, 2],
      [2, 1],
    ]);
    expect(report.unknown.held).toEqual({ kind: 'still', after: 2 });
  });

  it('takes in the whole of a period: what comes and goes is not known', async () => {
    // `shown` is `free` in every other cycle, and 0 between.
    const { gates, registers } = counter(1);
    const comes = smallCircuit({
      inputs: ['clk'],
      outputs: ['shown'],
      gates: { ...gates, gated: 'and free c0' },
      registers: {
        ...registers,
        free: { clock: 'clk', data: 'free' },
        shown: { clock: 'clk', data: 'gated' },
      },
    });
    for (const cycles of [40, 41]) {
      const { shown } = byName(await settled(comes, { cycles }));
      expect(shown!.verdict).toBe('powerUp');
      // Odd cycles load 0, for the counter starts at 0.
      expect(shown!.witness!.after).toBe(40);
    }
  });

  it('names latches and the nets that loops keep', async () => {
    const report = await settled(
      smallCircuit({
        inputs: ['s', 'r', 'e', 'd'],
        outputs: ['q', 'l'],
        gates: { q: 'nand s p', p: 'nand r q' },
        latches: { l: { enable: 'e', data: 'd' } },
      }),
    );
    expect(report.elements.map(({ name, kind }) => [name, kind])).toEqual([
      ['l', 'latch'],
      ['q', 'loop'],
    ]);
    expect(report).toMatchObject({ registers: 0, latches: 1, loopNets: 1 });
  });

  it('counts a lane that ends no more, and is open where none is left', async () => {
    const inverter = smallCircuit({
      inputs: ['clk'],
      outputs: ['r'],
      gates: { r: 'nand r q' },
      registers: { q: { clock: 'clk', data: 'q' } },
    });
    const report = await settled(inverter);
    const { q, r } = byName(report);
    const ends = Array.from({ length: 128 }, (_, lane) =>
      powerUpState(inverter, 'random', lane),
    ).flatMap(([value], lane) => (value === 1 ? [lane] : []));
    expect(report.faults.map(({ lane }) => lane)).toEqual(ends);
    expect(report.faults[0]).toMatchObject({ cycle: 0, seed: `${ends[0]}` });
    // Only lanes with q at 0 are left.
    expect(q).toMatchObject({ verdict: 'agreed', value: 0 });
    expect(r).toMatchObject({ verdict: 'agreed', value: 1 });
    const last = ends.find((lane) => !ends.includes(lane + 1))!;
    const one = await settled(inverter, { lanes: 2, seed: last });
    expect(byName(one).q).toEqual({ name: 'q', kind: 'register', verdict: 'undecided' });
    const alone = await settled(
      smallCircuit({ inputs: [], outputs: ['r'], gates: { r: 'not r' } }),
    );
    expect(alone.faults).toHaveLength(128);
    expect(byName(alone).r).toEqual({ name: 'r', kind: 'loop', verdict: 'undecided' });
  });
});

describe('the length of a run', () => {
  const chain = (length: number) => {
    const stages = Array.from({ length }, (_, i) => [
      `s${i}`,
      { clock: 'clk', data: i === 0 ? 'i' : `s${i - 1}` },
    ]);
    return Object.fromEntries(stages) as Record<string, { clock: string; data: string }>;
  };

  it('is what is asked for, with the stimulus cut or its last row held', async () => {
    const circuit = smallCircuit({ inputs: ['clk', 'i'], outputs: ['s2'], registers: chain(3) });
    const stimulus = [{ cycles: 2, rows: Uint32Array.of(0, 1), stride: 1 }];
    const cut = await settled(circuit, { stimulus, cycles: 1 });
    expect(cut).toMatchObject({ cycles: 1, stimulusCycles: 1 });
    expect(cut.unknown.held).toBeUndefined();
    expect(cut.elements.map(({ verdict }) => verdict)).toEqual(['known', 'powerUp', 'powerUp']);
    const held = await settled(circuit, { stimulus, cycles: 9 });
    expect(held).toMatchObject({ cycles: 9, stimulusCycles: 2 });
    expect(held.elements.map(({ value }) => value)).toEqual([1, 1, 1]);
    expect(await settled(circuit, { cycles: 0 })).toMatchObject({ cycles: 0, stimulusCycles: 0 });
  });

  it('is the stimulus and then until the states come again', async () => {
    const circuit = smallCircuit({ inputs: ['clk', 'i'], outputs: ['s9'], registers: chain(10) });
    const stimulus = [{ cycles: 5, rows: new Uint32Array(1), stride: 0 }];
    const report = await settled(circuit, { stimulus });
    expect(report.unknown.held).toEqual({ kind: 'still', after: 10 });
    expect(report.cycles).toBeLessThan(13);
  });

  it('ends when nothing has become known or unknown for a while', async () => {
    const { gates, registers } = counter(12);
    // Known when the counter has its eighth bit up, in cycle 128, and changing until then.
    const late = { late: { clock: 'clk', data: 'd' } };
    const circuit = smallCircuit({
      inputs: ['clk'],
      outputs: ['late'],
      gates: { ...gates, z: 'zero', d: 'mux c7 late z' },
      registers: { ...registers, ...late },
    });
    const report = await settled(circuit);
    expect(byName(report).late).toMatchObject({ verdict: 'known', knownAfter: 129 });
    expect(report.cycles).toBe(129 + QUIET_CYCLES);
    expect(report.unknown.held).toBeUndefined();
  });

  it('ends when the unknown bits go on changing', async () => {
    const { gates, registers } = counter(16);
    const circuit = smallCircuit({
      inputs: ['clk'],
      outputs: ['shown'],
      gates: { ...gates, gated: 'and free c0' },
      registers: {
        ...registers,
        free: { clock: 'clk', data: 'free' },
        shown: { clock: 'clk', data: 'gated' },
      },
    });
    expect((await settled(circuit)).cycles).toBe(MOST_HELD_CYCLES);
  });
});

describe('a wrong request', () => {
  const circuit = smallCircuit({ inputs: ['a'], outputs: ['a'] });
  it.each([
    [{ lanes: 1 }, `lanes are 2 to ${MOST_LANES}, got 1`],
    [{ lanes: MOST_LANES + 1 }, `lanes are 2 to ${MOST_LANES}, got ${MOST_LANES + 1}`],
    [{ cycles: -1 }, 'cycles is a count, got -1'],
  ])('is refused: %j', async (wrong, message) => {
    await expect(settled(circuit, wrong)).rejects.toEqual(new RangeError(message));
  });

  it('is refused: a three-valued design', async () => {
    const design = designOf(circuit, { threeValued: true });
    const request = { stimulus: [], lanes: 2, seed: 0 };
    await expect(settleDesign(design, request)).rejects.toThrow('must be two-valued');
  });
});
