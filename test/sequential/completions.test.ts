import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type CompileOptions, type Design, designOf, programsOf } from '../../compiler/compile.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import type { Engine } from '../../runtime/engine.js';
import type { RowLayout } from '../../runtime/layout.js';
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

/** What has been compared. Completions with a `RunFault` count up to the cycle before it. */
interface Counts {
  circuits: number;
  completions: number;
  faults: number;
  knownBits: number;
  unknownBits: number;
}

/** Fills the unknown places in all ways: bit i of `choice` goes to place i. */
function* choices(places: number): Generator<(place: number) => number> {
  for (let choice = 0; choice < 1 << places; choice++) yield (place) => (choice >> place) & 1;
}

/** A power-up of which some elements are x: those that no netlist value decides, up to a few. */
function unknownState(circuit: Circuit, random: RandomBits): { state: Uint8Array; open: number[] } {
  const all = powerUpState(circuit, 'unknown');
  const open = [...all.keys()].filter((i) => all[i] === X);
  while (open.length > MOST_STATES) open.splice(random.next() % open.length, 1);
  const state = all.map((value, i) =>
    value === X && !open.includes(i) ? random.next() & 1 : value,
  );
  return { state, open };
}

/** A bit of the stimulus that is x in one cycle. */
interface OpenInput {
  readonly cycle: number;
  readonly bit: number;
}

/** A few bits of the stimulus, to be x. */
function unknownInputs(design: Design, random: RandomBits): OpenInput[] {
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
  const element = state?.findIndex(
    (value, i) => known.state![i] !== X && known.state![i] !== value,
  );
  if (element === undefined || element < 0) return undefined;
  return `${three.layout.stateNames[element]} ends as ${state![element]}`;
}

function completed(
  engine: Engine,
  rows: Uint32Array,
  start: Uint8Array,
  open: readonly number[],
  unknown: readonly OpenInput[],
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

/** The rows with a second group of words behind each, which marks the unknown bits. */
function withUnknown(rows: Uint32Array, words: number, unknown: readonly OpenInput[]): Uint32Array {
  const marked = new Uint32Array(2 * rows.length);
  for (let at = 0; at < rows.length; at += words) {
    marked.set(rows.subarray(at, at + words), 2 * at);
  }
  for (const { cycle, bit } of unknown) {
    const at = 2 * cycle * words + (bit >>> 5);
    marked[at]! &= ~(1 << (bit & 31));
    marked[at + words]! |= 1 << (bit & 31);
  }
  return marked;
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

function countBits(counts: Counts, { response, cycles }: Course, { bits, words }: RowLayout): void {
  for (let cycle = 0; cycle < cycles; cycle++) {
    for (let bit = 0; bit < bits; bit++) {
      const isX = (response[(2 * cycle + 1) * words + (bit >>> 5)]! >>> (bit & 31)) & 1;
      counts[isX ? 'unknownBits' : 'knownBits']++;
    }
  }
}

async function expectNoContradiction(circuit: Circuit, seed: number, counts: Counts) {
  const random = new RandomBits(seed);
  const options = timingsFor(circuit, random);
  const two = designOf(circuit, options);
  const three = designOf(circuit, { ...options, threeValued: true });
  const { state, open } = unknownState(circuit, random);
  const unknown = unknownInputs(two, random);
  const rows = randomRows(two.layout, seed, CYCLES);
  const marked = withUnknown(rows, two.layout.inputs.words, unknown);
  const { reference, others } = await enginesOf(three);
  const known = courseOf(reference, state, marked, CYCLES);
  for (const [name, engine] of others) {
    expect(courseOf(engine, state, marked, CYCLES), name).toEqual(known);
  }
  counts.circuits++;
  countBits(counts, known, three.layout.outputs);
  const engine = new BytecodeEngine(programsOf(two), two.layout);
  for (const choice of choices(open.length + unknown.length)) {
    const possible = completed(engine, rows, state, open, unknown, choice);
    counts.completions++;
    if (possible.state === undefined) counts.faults++;
    expect(contradiction(three, known, possible)).toBeUndefined();
  }
}

async function holds(options: RandomCircuitOptions, numRuns: number): Promise<void> {
  const counts = { circuits: 0, completions: 0, faults: 0, knownBits: 0, unknownBits: 0 };
  await fc.assert(
    fc.asyncProperty(randomCircuit({ ...small, ...options }), fc.nat(1e6), (circuit, seed) =>
      expectNoContradiction(circuit, seed, counts),
    ),
    { seed: 71, numRuns },
  );
  console.log(options.clocking, options.loops ? 'with loops' : '', counts);
  expect(counts.knownBits).toBeGreaterThan(100);
  expect(counts.unknownBits).toBeGreaterThan(100);
  expect(counts.faults).toBeLessThan(counts.completions);
}

describe('what a three-valued run knows holds however the unknown is filled in', () => {
  const all: RandomCircuitOptions = { asynchronous: true, latches: true, unknowns: true };
  const clockings = ['oneEdge', 'edges', 'gated', 'divided', 'twoClocks'] as const;

  it.each(clockings)('with registers clocked as %s', (clocking) => holds({ ...all, clocking }, 50));
  it.each(clockings)('with combinational loops and registers clocked as %s', (clocking) =>
    holds({ ...all, clocking, loops: true, maxGates: 8 }, 12),
  );
});
