import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import {
  type CompileOptions,
  type Design,
  designOf,
  programsOf,
} from '../../../compiler/compile.js';
import { BytecodeEngine } from '../../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { InterpretedLanes } from '../../../compiler/settle/lanes/interpretedLanes.js';
import type { LaneMachine } from '../../../compiler/settle/lanes/laneMachine.js';
import { LaneRunner } from '../../../compiler/settle/lanes/laneRunner.js';
import { RunFault } from '../../../runtime/engine.js';
import { rowStride } from '../../../runtime/layout.js';
import { randomBanks } from '../../support/randomBanks.js';
import { type RandomCircuitOptions, randomCircuit } from '../../support/randomCircuit.js';
import { randomRows } from '../../support/responses.js';
import { smallCircuit } from '../../support/smallCircuit.js';

const SEED = 20260812;
const CYCLES = 20;

/** What interprets so many lanes of a design. */
const machineOf = (design: Design, lanes: number): LaneMachine =>
  new InterpretedLanes(programsOf(design), Math.ceil(lanes / 128));

type EngineMaker = 'bytecode' | 'reference';

/**
 * Runs a circuit from some power-ups in lanes, and from each alone on an engine: the state of each
 * lane must be the same after every cycle, and the same lanes must end for want of a result.
 */
function expectLanesAsEngine(
  circuit: Circuit,
  options: CompileOptions,
  seed: number,
  lanes: number,
  maker: EngineMaker = 'bytecode',
): void {
  const design = designOf(circuit, options);
  const programs = programsOf(design);
  const mode = design.layout.threeValued ? 'unknown' : 'random';
  const powerUp = (lane: number) => powerUpState(circuit, mode, seed + lane);
  const runner = new LaneRunner(machineOf(design, lanes), design.layout, lanes, powerUp);
  const engines = Array.from({ length: lanes }, (_, lane) => {
    const engine =
      maker === 'bytecode'
        ? new BytecodeEngine(programs, design.layout)
        : new ReferenceEngine(circuit, design);
    engine.reset(powerUp(lane));
    return engine;
  });
  const rows = randomRows(design.layout, seed, CYCLES);
  const stride = rowStride(design.layout.inputs, design.layout.threeValued);
  const ended: number[][] = [];
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    const row = rows.subarray(cycle * stride, (cycle + 1) * stride);
    runner.run(row);
    engines.forEach((engine, lane) => {
      if (ended.some(([gone]) => gone === lane)) return;
      try {
        engine.run(1, row, 0, undefined);
        expect(runner.stateOf(lane), `lane ${lane} after ${cycle + 1}`).toEqual(engine.state());
      } catch (error) {
        if (!(error instanceof RunFault)) throw error;
        ended.push([lane, cycle]);
      }
    });
  }
  expect(runner.faults.map(({ lane, cycle }) => [lane, cycle])).toEqual(ended);
}

function holdsFor(
  options: RandomCircuitOptions,
  numRuns: number,
  compile: (circuit: Circuit) => CompileOptions = () => ({}),
  maker?: EngineMaker,
): void {
  fc.assert(
    fc.property(
      randomCircuit(options),
      fc.nat(1e6),
      fc.integer({ min: 1, max: 10 }),
      (circuit, seed, lanes) => expectLanesAsEngine(circuit, compile(circuit), seed, lanes, maker),
    ),
    { seed: SEED, numRuns },
  );
}

describe('each lane does what an engine does from the same power-up', () => {
  it('with registers on one edge', () => holdsFor({}, 20));
  it('with asynchronous set and reset, latches and gated clocks', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, 20));
  it('with divided clocks', () => holdsFor({ clocking: 'divided', latches: true }, 15));
  it('with combinational loops, of which some never settle', () =>
    holdsFor({ loops: true, latches: true, asynchronous: true, maxGates: 20 }, 15));
  it('as the reference runs it', () =>
    holdsFor({ loops: true, clocking: 'edges', asynchronous: true }, 12, undefined, 'reference'));
  it('with three values', () =>
    holdsFor({ unknowns: true, asynchronous: true }, 12, () => ({ threeValued: true })));

  it('with clocks each at its own pace', () => {
    const timings = [
      { port: 'clk', period: 4, offset: 1 },
      { port: 'clk2', period: 6, offset: 0 },
    ];
    holdsFor({ clocking: 'twoClocks', latches: true }, 20, (circuit) => {
      const clocks = findClockPorts(circuit).ports.map(({ name }) => name);
      const known = timings.filter(({ port }) => clocks.includes(port));
      return known.length > 0 ? { timings: known } : {};
    });
  });

  it('with banks of registers', () => {
    fc.assert(
      fc.property(randomBanks(), fc.nat(1e6), (circuit, seed) =>
        expectLanesAsEngine(circuit, {}, seed, 5),
      ),
      { seed: SEED, numRuns: 12 },
    );
  });

  it.each([31, 32, 33, 128, 129, 300])('with %i lanes', (lanes) => {
    fc.assert(
      fc.property(randomCircuit({ asynchronous: true }), fc.nat(1e6), (circuit, seed) =>
        expectLanesAsEngine(circuit, {}, seed, lanes),
      ),
      { seed: SEED + lanes, numRuns: 2 },
    );
  });
});

describe('a lane runner', () => {
  const held = smallCircuit({
    inputs: ['clk'],
    outputs: ['p', 'q'],
    registers: { p: { clock: 'clk', data: 'p' }, q: { clock: 'clk', data: 'q', initial: 1 } },
  });
  const runnerFrom = (circuit: Circuit, ...states: number[][]): LaneRunner => {
    const design = designOf(circuit);
    return new LaneRunner(machineOf(design, states.length), design.layout, states.length, (lane) =>
      Uint8Array.from(states[lane]!),
    );
  };
  const differences = (runner: LaneRunner, lane: number): number[][] => {
    const found: number[][] = [];
    runner.eachDifference(lane, (...difference) => found.push(difference));
    return found;
  };

  it('names the lowest lane that differs in each element, with the value of the one compared', () => {
    const many = Array.from({ length: 200 }, (_, lane) => [lane === 170 ? 0 : 1, 0]);
    const runner = runnerFrom(held, ...many);
    expect(differences(runner, 0)).toEqual([[0, 170, 1]]);
    expect(differences(runner, 170)).toEqual([[0, 0, 0]]);
    expect(differences(runnerFrom(held, [0, 1], [0, 1]), 0)).toEqual([]);
  });

  it('compares no lane that has ended', () => {
    // The ring settles at 1 while q is 0, and never where q makes an inverter of it.
    const ring = smallCircuit({
      inputs: ['clk'],
      outputs: ['r'],
      gates: { r: 'nand r q' },
      registers: { q: { clock: 'clk', data: 'q' }, p: { clock: 'clk', data: 'p' } },
    });
    // Elements: q, p, and r, which the loop keeps.
    const runner = runnerFrom(ring, [1, 0, 0], [0, 0, 1], [0, 0, 1], [1, 1, 0]);
    expect(runner.firstRunning).toBe(0);
    runner.run(new Uint32Array(0));
    expect(runner.faults.map(({ lane, cycle }) => [lane, cycle])).toEqual([
      [0, 0],
      [3, 0],
    ]);
    expect(runner.faults[0]!.message).toMatch(/does not settle: r\b/);
    expect(runner.firstRunning).toBe(1);
    expect(differences(runner, 1)).toEqual([]);
    runner.run(new Uint32Array(0));
    expect(runner.faults).toHaveLength(2);
  });

  it('has no lane left to compare where all have ended', () => {
    const inverter = smallCircuit({ inputs: [], outputs: ['r'], gates: { r: 'not r' } });
    const runner = runnerFrom(inverter, [0], [1]);
    runner.run(new Uint32Array(0));
    expect(runner.firstRunning).toBe(-1);
  });

  it('finds itself again in a state copied before', () => {
    const toggle = smallCircuit({
      inputs: ['clk'],
      outputs: ['q'],
      gates: { d: 'not q' },
      registers: { q: { clock: 'clk', data: 'd' } },
    });
    const runner = runnerFrom(toggle, [0], [1]);
    const start = runner.snapshot();
    expect(runner.isAt(start)).toBe(true);
    runner.run(new Uint32Array(0));
    expect(runner.isAt(start)).toBe(false);
    runner.run(new Uint32Array(0));
    expect(runner.isAt(start)).toBe(true);
  });

  it('refuses lanes that are no count, and states that an engine refuses', () => {
    const design = designOf(held);
    const make = (lanes: number, state: number[]) => () =>
      new LaneRunner(machineOf(design, 2), design.layout, lanes, () => Uint8Array.from(state));
    expect(make(0, [0, 0])).toThrow(new RangeError('lanes are a count from 1 to 128, got 0'));
    expect(make(1.5, [0, 0])).toThrow(RangeError);
    expect(make(129, [0, 0])).toThrow(RangeError);
    expect(make(2, [0])).toThrow('expected 2 state values, got 1');
    expect(make(2, [0, 2])).toThrow('q takes 0 to 1, got 2');
  });
});
