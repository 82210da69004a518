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
import { compileLanes } from '../../../compiler/compileLanes.js';
import { localEmitter } from '../../../compiler/emit/emitter.js';
import { chooseLanes } from '../../../compiler/settle/lanes/chooseLanes.js';
import { CompiledLanes } from '../../../compiler/settle/lanes/compiledLanes.js';
import { InterpretedLanes } from '../../../compiler/settle/lanes/interpretedLanes.js';
import type { LaneMachine } from '../../../compiler/settle/lanes/laneMachine.js';
import { LaneRunner } from '../../../compiler/settle/lanes/laneRunner.js';
import { ownDesign } from '../../support/ownCircuits.js';
import { type RandomCircuitOptions, randomCircuit } from '../../support/randomCircuit.js';
import { randomRows } from '../../support/responses.js';

const SEED = 20261104;
const CYCLES = 10;
const emitter = localEmitter();

/** All that a runner says of its lanes. */
function wordsOf(runner: LaneRunner): unknown {
  const lane = runner.firstRunning;
  const differences: number[][] = [];
  if (lane >= 0) runner.eachDifference(lane, (...found) => differences.push(found));
  const ended = new Set(runner.faults.map((fault) => fault.lane));
  const lanes = Array.from({ length: runner.lanes }, (_, i) => i).filter((i) => !ended.has(i));
  return { lane, differences, faults: runner.faults, states: lanes.map((i) => runner.stateOf(i)) };
}

/** Runs lanes on both machines and expects the same of them after every cycle. */
async function expectSame(design: Design, lanes: number, seed: number): Promise<void> {
  const blocks = Math.ceil(lanes / 128);
  const model = await compileLanes(design, 128, emitter);
  const [compiled, interpreted] = [
    await CompiledLanes.create(model, blocks),
    new InterpretedLanes(programsOf(design), blocks),
  ].map((machine: LaneMachine) => {
    const powerUp = (lane: number) => powerUpState(design.circuit, 'random', seed + lane);
    return new LaneRunner(machine, design.layout, lanes, powerUp);
  });
  const { words } = design.layout.inputs;
  const rows = randomRows(design.layout, seed, CYCLES);
  const start = [compiled!.snapshot(), interpreted!.snapshot()] as const;
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    const row = rows.subarray(cycle * words, (cycle + 1) * words);
    compiled!.run(row);
    interpreted!.run(row);
    expect(wordsOf(compiled!)).toEqual(wordsOf(interpreted!));
    expect(compiled!.isAt(start[0])).toBe(interpreted!.isAt(start[1]));
    expect(compiled!.isAt(compiled!.snapshot())).toBe(true);
  }
}

function holdsFor(
  options: RandomCircuitOptions,
  compile: (circuit: Circuit) => CompileOptions = () => ({}),
): Promise<void> {
  return fc.assert(
    fc.asyncProperty(
      randomCircuit(options),
      fc.nat(1e6),
      fc.constantFrom(3, 33, 128, 300),
      (circuit, seed, lanes) => expectSame(designOf(circuit, compile(circuit)), lanes, seed),
    ),
    { seed: SEED, numRuns: 6 },
  );
}

describe('compiled lanes do what interpreted ones do', () => {
  it('with registers on one edge', () => holdsFor({}));
  it('with latches, gated clocks, set and reset', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }));
  it('with combinational loops, of which some never settle', () =>
    holdsFor({ loops: true, latches: true, maxGates: 20 }));
  it('with clocks each at its own pace', () => {
    const timings = [
      { port: 'clk', period: 4, offset: 1 },
      { port: 'clk2', period: 6, offset: 0 },
    ];
    return holdsFor({ clocking: 'twoClocks', loops: true, maxGates: 20 }, (circuit) => {
      const clocks = findClockPorts(circuit).ports.map(({ name }) => name);
      const known = timings.filter(({ port }) => clocks.includes(port));
      return known.length > 0 ? { timings: known } : {};
    });
  });
});

describe('chooseLanes', () => {
  it('compiles where there is much to do', async () => {
    const design = ownDesign('counter');
    expect(await chooseLanes(design, 128)).toBeInstanceOf(InterpretedLanes);
    const many = await chooseLanes(design, 65536);
    expect(many).toBeInstanceOf(CompiledLanes);
    expect(many.blocks).toBe(512);
  });
});
