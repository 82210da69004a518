import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type CompileOptions, designOf } from '../../compiler/compile.js';
import { createEngine } from '../../compiler/engines.js';
import { type Engine, RunFault } from '../../runtime/engine.js';
import { RandomBits } from '../../runtime/random.js';
import { enginesOf } from '../support/engines.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { derivedClocks } from './derivedClocks.js';
import { inputBits, outputBits } from './values.js';

const CYCLES = 10;
/** State elements, and input bits of single cycles, that are left unknown. */
const MOST_STATES = 5;
const MOST_INPUTS = 3;
const X = 2;

/** What has been compared. */
interface Counts {
  circuits: number;
  completions: number;
  /** Completions that ended in a `RunFault`; they count up to the cycle before it. */
  faults: number;
  known: number;
  unknown: number;
}

/** The power-up and the input bits of all cycles, 0 or 1, and the places of them that are open. */
interface Question {
  readonly start: Uint8Array;
  readonly inputs: Uint8Array;
  readonly openStates: readonly number[];
  readonly openInputs: readonly number[];
}

function ask(circuit: Circuit, inputBitCount: number, random: RandomBits): Question {
  const choose = (length: number, most: number): number[] => {
    const places = Array.from({ length }, (_, i) => i);
    while (places.length > most) places.splice(random.next() % places.length, 1);
    return places;
  };
  const anyBit = (): number => random.next() & 1;
  const inputs = new Uint8Array(CYCLES * inputBitCount).map(anyBit);
  // What the netlist gives is open too.
  const start = powerUpState(circuit, 'zero').map(anyBit);
  return {
    start,
    inputs,
    openStates: choose(start.length, MOST_STATES),
    openInputs: choose(inputs.length, MOST_INPUTS),
  };
}

/** Fills the open places: with x, or place i of all of them with bit i of a number. */
function filled({ start, inputs, openStates, openInputs }: Question, choice: number | undefined) {
  const [state, row] = [start.slice(), inputs.slice()];
  const value = (place: number): number => (choice === undefined ? X : (choice >> place) & 1);
  openStates.forEach((element, place) => {
    state[element] = value(place);
  });
  openInputs.forEach((bit, place) => {
    row[bit] = value(openStates.length + place);
  });
  return { state, row };
}

/**
 * All outputs of each cycle and the state after it, one after another: 0, 1 or 2 for x. Shorter
 * where a cycle has no result.
 */
function courseOf(engine: Engine, question: Question, choice: number | undefined): number[] {
  const { state, row } = filled(question, choice);
  engine.reset(state);
  const seen: number[] = [];
  const bits = row.length / CYCLES;
  try {
    for (let cycle = 0; cycle < CYCLES; cycle++) {
      seen.push(...outputBits(engine, inputBits(engine.layout, row.subarray(cycle * bits))));
      seen.push(...engine.state());
    }
  } catch (error) {
    if (!(error instanceof RunFault)) throw error;
  }
  return seen;
}

/** Two clocks have periods and offsets of their own in half of the cases. */
function timingsFor(circuit: Circuit, random: RandomBits): CompileOptions {
  const { ports } = findClockPorts(circuit);
  if (ports.length < 2 || random.next() & 1) return {};
  const timings = ports.map(({ name }) => {
    const period = 2 + (random.next() % 5);
    return { port: name, period, offset: random.next() % period };
  });
  return { timings };
}

async function expectNoContradiction(circuit: Circuit, seed: number, counts: Counts, all: boolean) {
  const random = new RandomBits(seed);
  const options = timingsFor(circuit, random);
  const two = designOf(circuit, options);
  const three = designOf(circuit, { ...options, threeValued: true });
  const question = ask(circuit, two.layout.inputs.bits, random);
  const known = courseOf(await createEngine(three, 'reference'), question, undefined);
  for (const [name, engine] of all ? (await enginesOf(three)).others : []) {
    expect(courseOf(engine, question, undefined), name).toEqual(known);
  }
  counts.circuits++;
  for (const value of known) counts[value === X ? 'unknown' : 'known']++;
  const engine = await createEngine(two, all ? 'bytecode' : 'reference');
  const places = question.openStates.length + question.openInputs.length;
  for (let choice = 0; choice < 1 << places; choice++) {
    const possible = courseOf(engine, question, choice);
    counts.completions++;
    if (possible.length < known.length) counts.faults++;
    const wrong = possible.findIndex((value, i) => known[i] !== X && known[i] !== value);
    expect(wrong, `completion ${choice} of ${JSON.stringify(question)}`).toBe(-1);
  }
}

const small: RandomCircuitOptions = {
  maxInputs: 3,
  maxWidth: 2,
  maxRegisters: 5,
  maxGates: 14,
  maxOutputs: 2,
  asynchronous: true,
  latches: true,
  unknowns: true,
};

interface Trial {
  readonly seed: number;
  /** Default 40. */
  readonly numRuns?: number;
  /** Whether the three-valued run is one on every engine; else on the reference engine. */
  readonly all: boolean;
}

async function holds(circuits: fc.Arbitrary<Circuit>, { seed, numRuns = 20, all }: Trial) {
  const counts: Counts = { circuits: 0, completions: 0, faults: 0, known: 0, unknown: 0 };
  await fc.assert(
    fc.asyncProperty(fc.noBias(circuits), fc.nat(1e6), (circuit, fill) =>
      expectNoContradiction(circuit, fill, counts, all),
    ),
    { seed, numRuns },
  );
  console.log(`${expect.getState().currentTestName}: ${JSON.stringify(counts)}`);
  expect(counts.known).toBeGreaterThan(10 * numRuns);
  expect(counts.unknown).toBeGreaterThan(10 * numRuns);
  expect(counts.faults).toBeLessThan(counts.completions * 0.6);
}

const clockings = [
  { clocking: 'oneEdge', seed: 1 },
  { clocking: 'edges', seed: 2 },
  { clocking: 'gated', seed: 3 },
  { clocking: 'divided', seed: 4 },
  { clocking: 'twoClocks', seed: 5 },
] as const;

describe('what a three-valued run knows holds however the unknown is filled in', () => {
  it.each(clockings)('with registers clocked as $clocking', ({ clocking, seed }) =>
    holds(randomCircuit({ ...small, clocking }), { seed, all: true }),
  );

  // Loops and clocks made by registers take long to compile; the interpreter alone does many more.
  it.each(clockings)('with loops and registers clocked as $clocking', ({ clocking, seed }) =>
    holds(randomCircuit({ ...small, clocking, loops: true }), { seed, all: false }),
  );
  it('with registers that clock one another', () =>
    holds(derivedClocks, { seed: 6, numRuns: 40, all: false }));
  it('with some of them on every engine', () =>
    holds(derivedClocks, { seed: 7, numRuns: 4, all: true }));
});
