import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findClockPorts } from '../compiler/circuit/clockPorts.js';
import { type ClockTiming, timedSchedule } from '../compiler/circuit/clockSchedule.js';
import { designOf } from '../compiler/compile.js';
import { expectAgreement } from './support/agreement.js';
import { courseOf, enginesOf } from './support/engines.js';
import { randomCircuit } from './support/randomCircuit.js';
import { smallCircuit } from './support/smallCircuit.js';

const timing = (port: string) =>
  fc
    .record({ period: fc.integer({ min: 2, max: 9 }), offset: fc.nat(8) })
    .map(({ period, offset }): ClockTiming => ({ port, period, offset: offset % period }));

const CYCLES = 50;

describe('the engines agree', () => {
  it('with two clocks of any periods and offsets', async () => {
    const circuits = randomCircuit({ clocking: 'twoClocks', latches: true, asynchronous: true });
    await fc.assert(
      fc.asyncProperty(
        circuits,
        timing('clk'),
        timing('clk2'),
        fc.boolean(),
        fc.nat(1e6),
        (circuit, first, second, threeValued, seed) => {
          // A circuit may have no register for the second clock, which then is a data input.
          const known = findClockPorts(circuit).ports.map(({ name }) => name);
          const timings = [first, second].filter(({ port }) => known.includes(port));
          const timed = timings.length > 0 ? { timings } : {};
          return expectAgreement(designOf(circuit, { ...timed, threeValued }), seed, CYCLES);
        },
      ),
      { seed: 52, numRuns: 60 },
    );
  });
});

describe('two clocks', () => {
  const counters = smallCircuit({
    inputs: ['a', 'b'],
    outputs: ['p', 'q'],
    gates: { np: 'not p', nq: 'not q' },
    registers: { p: { clock: 'a', data: 'np' }, q: { clock: 'b', data: 'nq' } },
  });
  const response = async (timings: readonly ClockTiming[], cycles: number) => {
    const { reference, others } = await enginesOf(designOf(counters, { timings }));
    const rows = new Uint32Array(cycles);
    const courses = [reference, ...others.map(([, engine]) => engine)].map((engine) =>
      courseOf(engine, Uint8Array.of(0, 0), rows, cycles),
    );
    for (const course of courses) expect(course).toEqual(courses[0]);
    return Array.from(courses[0]!.response, (row) => `${row & 1}${row >>> 1}`).join(' ');
  };

  // Edges by hand: a at 0 4 8 12 16 20, b at 3 9 15 21. A cycle is 4 ticks; sampled at 0 4 8 …:
  // after no edge, after a0 b3, a4, a8 b9, a12 b15, a16, a20 b21.
  it('tick each at its own pace', async () => {
    const timings = [
      { port: 'a', period: 4, offset: 0 },
      { port: 'b', period: 6, offset: 3 },
    ];
    expect(await response(timings, 7)).toBe('00 11 01 10 01 11 00');
  });

  // a at 1 6 11 16 21, b at 0 7 14 21; sampled just before a's edges: after b0, after a1, a6 b7,
  // a11 b14, a16, a21 b21.
  it('with coprime periods meet in the pattern of their common multiple', async () => {
    const timings = [
      { port: 'a', period: 5, offset: 1 },
      { port: 'b', period: 7, offset: 0 },
    ];
    expect(await response(timings, 6)).toBe('01 11 00 11 01 10');
  });

  it('whose edges coincide capture at the same moment', async () => {
    const timings = [
      { port: 'a', period: 2, offset: 0 },
      { port: 'b', period: 4, offset: 0 },
    ];
    expect(await response(timings, 5)).toBe('00 11 01 10 00');
  });
});

describe('timedSchedule', () => {
  const clocks = findClockPorts(
    smallCircuit({
      inputs: ['a', 'b'],
      outputs: ['p', 'q'],
      registers: { p: { clock: 'a', data: 'q' }, q: { clock: 'b', data: 'p' } },
    }),
  );
  const a = { port: 'a', period: 4, offset: 0 };

  it('has one shape for each way in which the clocks meet', () => {
    const { pattern, shapes } = timedSchedule(clocks, [a, { port: 'b', period: 6, offset: 0 }]);
    expect([...pattern]).toEqual([0, 1, 2]);
    expect(shapes.length).toBe(3);
  });

  it.each([
    [[a], 'clock b has no timing'],
    [[a, a, { ...a, port: 'b' }], 'clock a has 2 timings'],
    [[a, { port: 'b', period: 1, offset: 0 }], 'the period of b must be 2 to 1000000 ticks, got 1'],
    [[a, { port: 'b', period: 4, offset: 4 }], 'the offset of b must be 0 to 3 ticks, got 4'],
    [[a, { port: 'b', period: 999983, offset: 0 }], 'pattern repeats after 999983 cycles'],
  ])('refuses timings that cannot be run', (timings, message) => {
    expect(() => timedSchedule(clocks, timings)).toThrow(message);
  });
});
