import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf, programsOf } from '../../compiler/compile.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import type { Engine } from '../../runtime/engine.js';
import { RandomBits } from '../../runtime/random.js';
import { type Course, courseOf, enginesOf } from '../support/engines.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';

const CYCLES = 12;
/** State elements, and bits of the stimulus, that are left unknown. */
const MOST_STATES = 5;
const MOST_INPUTS = 3;
const X = 2;

const small: RandomCircuitOptions = { maxInputs: 3, maxWidth: 2, maxRegisters: 5, maxGates: 14 };

const counts = { circuits: 0, completions: 0, faults: 0, known: 0, unknown: 0 };

/** Fills the unknown places in all ways: bit i of `choice` goes to place i. */
function* choices(places: number): Generator<(place: number) => number> {
  for (let choice = 0; choice < 1 << places; choice++) yield (place) => (choice >> place) & 1;
}

/** A power-up of which some elements are x: those that no netlist value decides, up to a few. */
function unknownState(circuit: Circuit, random: RandomBits): { state: Uint8Array; open: number[] } {
  const all = powerUpState(circuit, 'unknown');
  const open = [...all.keys()].filter((i) => all[i] === X);
  while (open.length > MOST_STATES) open.splice(random.next() % open.length, 1);
  const state = all.map((value, i) => (value === X && !open.includes(i) ? random.next() & 1 : value));
  return { state, open };
}

/** The row bits at which a few inputs are x: cycle and bit, in the packed three-valued rows. */
function unknownInputs(design: Design, random: RandomBits): { cycle: number; bit: number }[] {
  const { bits } = design.layout.inputs;
  if (bits === 0) return [];
  return Array.from({ length: MOST_INPUTS }, () => ({
    cycle: random.next() % CYCLES,
    bit: random.next() % bits,
  }));
}

/** Compares a completion with the three-valued course; what is x may be anything. */
function contradiction(three: Design, known: Course, possible: Course): string | undefined {
  const { outputs } = three.layout;
  const { words } = outputs;
  for (let cycle = 0; cycle < possible.cycles; cycle++) {
    for (let word = 0; word < words; word++) {
      const one = known.response[cycle * 2 * words + word]!;
      const isX = known.response[cycle * 2 * words + words + word]!;
      const wrong = (one ^ possible.response[cycle * words + word]!) & ~isX;
      if (wrong !== 0) return `cycle ${cycle}: output bits ${wrong.toString(2)} of word ${word}`;
    }
  }
  const { state } = possible;
  const element = state?.findIndex((value, i) => known.state![i] !== X && known.state![i] !== value);
  if (element === undefined || element < 0) return undefined;
  return `${three.layout.stateNames[element]} ends as ${state![element]}`;
}

function completed(
  engine: Engine,
  rows: Uint32Array,
  start: Uint8Array,
  open: readonly number[],
  unknown: readonly { cycle: number; bit: number }[],
  choice: (place: number) => number,
): Course {
  const state = start.slice();
  open.forEach((element, place) => {
    state[element] = choice(place);
  });
  const filled = rows.slice();
  unknown.forEach(({ cycle, bit }, i) => {
    const at = cycle * engine.layout.inputs.words + (bit >>> 5);
    const mask = 1 << (bit & 31);
    filled[at] = choice(open.length + i) ? filled[at]! | mask : filled[at]! & ~mask;
  });
  return courseOf(engine, state, filled, CYCLES);
}

async function expectNoContradiction(circuit: Circuit, seed: number) {
  const random = new RandomBits(seed);
  const two = designOf(circuit);
  const three = designOf(circuit, { threeValued: true });
  const { state, open } = unknownState(circuit, random);
  const unknown = unknownInputs(two, random);
  const rows = randomRows(two.layout, seed, CYCLES);
  const { words } = two.layout.inputs;
  const rowsWithX = new Uint32Array(2 * rows.length);
  rows.forEach((value, i) => {
    rowsWithX[Math.floor(i / words) * 2 * words + (i % words)] = value;
  });
  for (const { cycle, bit } of unknown) {
    const at = cycle * 2 * words + (bit >>> 5);
    rowsWithX[at]! &= ~(1 << (bit & 31));
    rowsWithX[at + words]! |= 1 << (bit & 31);
  }
  const { reference, others } = await enginesOf(three);
  const known = courseOf(reference, state, rowsWithX, CYCLES);
  for (const [name, engine] of others) {
    expect(courseOf(engine, state, rowsWithX, CYCLES), name).toEqual(known);
  }
  const engine = new BytecodeEngine(programsOf(two), two.layout);
  counts.circuits++;
  for (const choice of choices(open.length + unknown.length)) {
    const possible = completed(engine, rows, state, open, unknown, choice);
    counts.completions++;
    if (possible.state === undefined) counts.faults++;
    expect(contradiction(three, known, possible)).toBeUndefined();
  }
}

const NUM = Number(process.env.NUM ?? 60);
const SEED = Number(process.env.SEED ?? 71);
const holds = (options: RandomCircuitOptions, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(randomCircuit({ ...small, ...options }), fc.nat(1e6), expectNoContradiction),
    { seed: SEED, numRuns },
  );

describe('what a three-valued run knows holds however the unknown is filled in', () => {
  const all = { asynchronous: true, latches: true, unknowns: true };
  it('on one edge', () => holds({ ...all, latches: false }, NUM));
  it('on both edges', () => holds({ ...all, clocking: 'edges' }, NUM));
  it('with combinational loops', () => holds({ ...all, loops: true }, NUM));
  it('with loops and both edges', () => holds({ ...all, clocking: 'edges', loops: true }, NUM));
  it('behind gating cells', () => holds({ ...all, clocking: 'gated' }, NUM));
  it('behind gating cells with loops', () => holds({ ...all, clocking: 'gated', loops: true }, NUM));
  it('on divided clocks', () => holds({ ...all, clocking: 'divided' }, NUM));
  it('on divided clocks with loops', () => holds({ ...all, clocking: 'divided', loops: true }, NUM));
  it('on two clocks', () => holds({ ...all, clocking: 'twoClocks' }, NUM));
  it('on two clocks with loops', () => holds({ ...all, clocking: 'twoClocks', loops: true }, NUM));

  afterAll(() => console.log(counts));
});
