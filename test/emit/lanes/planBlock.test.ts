import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf } from '../../../compiler/compile.js';
import { laneProgramsOf } from '../../../compiler/compileLanes.js';
import { ANCHOR_SLOT, anchored } from '../../../compiler/emit/lanes/anchored.js';
import { laneStores, Region } from '../../../compiler/emit/lanes/laneStores.js';
import {
  type BlockPlan,
  type Planning,
  planBlock,
  planCopies,
  type Step,
} from '../../../compiler/emit/lanes/planBlock.js';
import { spillsOf } from '../../../compiler/emit/lanes/spills.js';
import { Windows } from '../../../compiler/emit/lanes/windows.js';
import type { LaneProgram } from '../../../compiler/program/laneProgram.js';
import type { ModelLayout } from '../../../runtime/layout.js';
import { laneResult, laneValues } from '../../support/laneProgram.js';
import { ownDesign } from '../../support/ownCircuits.js';
import { randomCircuit } from '../../support/randomCircuit.js';

const circuits = randomCircuit({ maxRegisters: 30, maxGates: 150, asynchronous: true });

/** Every result has a scratch word, so that any block may read it. */
function planningOf(program: LaneProgram, layout: ModelLayout): Planning {
  return {
    program,
    stores: laneStores(program, layout.outputs, 1),
    inputSlots: Int32Array.from({ length: program.inputCount }, (_, bit) => bit),
    wires: Int32Array.from(program.op, (_, i) => 1 + program.faults.length + i),
  };
}

/** Carries steps out on the words of all regions; throws where a local is not set once and first. */
function carryOut(steps: readonly Step[], regions: readonly Map<number, number>[]): void {
  const locals = new Map<number, number>();
  const get = (local: number): number => {
    if (!locals.has(local)) throw new Error(`local ${local} is read before it is set`);
    return locals.get(local)!;
  };
  for (const step of steps) {
    if (step.kind === 'store') {
      regions[step.region]!.set(step.slot, get(step.from));
      continue;
    }
    if (locals.has(step.to)) throw new Error(`local ${step.to} is set twice`);
    if (step.kind === 'constant') locals.set(step.to, step.bit === 0 ? 0 : -1);
    else if (step.kind === 'operate') {
      locals.set(step.to, laneResult(step.op, step.operands.map(get)));
    } else {
      const word = regions[step.region]!.get(step.slot);
      if (word === undefined) throw new Error(`nothing is in ${step.region}, ${step.slot}`);
      locals.set(step.to, word);
    }
  }
}

const scramble = (number: number): number => Math.imul(number + 1, 0x9e3779b1) ^ number;

describe('the plans of all blocks of a program', () => {
  it('store what the program says, with any number of values kept and with anchors', () => {
    fc.assert(
      fc.property(
        circuits,
        fc.integer({ min: 1, max: 40 }),
        fc.integer({ min: 0, max: 20 }),
        (circuit, length, kept) => {
          const design = designOf(circuit);
          const program = laneProgramsOf(design, 128).programs[0]!;
          const planning = planningOf(program, design.layout);
          const inputs = Array.from({ length: program.inputCount }, (_, i) => scramble(i));
          const states = program.states.map((_, i) => scramble(-i));
          const regions = [states, [], inputs, [], []].map(
            (words) => new Map<number, number>(words.entries()),
          );
          for (let start = 0; start < program.op.length; start += length) {
            const end = Math.min(program.op.length, start + length);
            const plan = planBlock(planning, start, end, kept);
            carryOut(anchored(plan, 3).steps, regions);
          }
          carryOut(planCopies(planning, planning.stores.rest).steps, regions);
          const values = laneValues(program, inputs, states);
          const expected = (numbers: Uint32Array) => Array.from(numbers, (value) => values[value]!);
          const stored = (region: number, count: number) =>
            Array.from({ length: count }, (_, slot) => regions[region]!.get(slot));
          expect(stored(Region.Next, program.stateCount)).toEqual(expected(program.next));
          const { length: outputs } = program.outputs;
          expect(stored(Region.Response, outputs)).toEqual(expected(program.outputs));
        },
      ),
      { seed: 51, numRuns: 60 },
    );
  });
});

const load = (to: number): Step => ({ kind: 'load', to, region: Region.Current, slot: to });
const store = (from: number): Step => ({ kind: 'store', from, region: Region.Next, slot: from });
const and = (to: number, ...operands: number[]): Step => ({ kind: 'operate', to, op: 0, operands });

describe('spillsOf', () => {
  // Sums of sums: 8 values, joined two by two.
  const tree: Step[] = [
    ...[0, 1, 2, 3, 4, 5, 6, 7].map(load),
    and(8, 0, 1),
    and(9, 2, 3),
    and(10, 4, 5),
    and(11, 6, 7),
    and(12, 8, 9),
    and(13, 10, 11),
    and(14, 12, 13),
    store(14),
  ];

  it('is 0 where registers suffice', () => expect(spillsOf(tree, 8)).toBe(0));

  it('counts a store and a load for each value put aside', () => {
    expect(spillsOf(tree, 7)).toBe(2);
    expect(spillsOf(tree, 6)).toBe(4);
  });

  it('moves operations down to their readers, behind loads that come later', () => {
    const early = [load(0), load(1), and(2, 0, 1), load(3), load(4), and(5, 3, 4), and(6, 2, 5)];
    expect(spillsOf([...early, store(6)], 4)).toBe(0);
    expect(spillsOf([...early, store(6)], 3)).toBeGreaterThan(0);
  });
});

describe('anchored', () => {
  // Joins three values; the result is wanted last of all.
  const first = [load(0), load(1), load(2), and(3, 0, 1), and(4, 3, 2)];
  const rest = Array.from({ length: 6 }, (_, i) => [
    load(10 + 3 * i),
    load(11 + 3 * i),
    and(12 + 3 * i, 10 + 3 * i, 11 + 3 * i),
    store(12 + 3 * i),
  ]).flat();
  const plan: BlockPlan = { steps: [...first, ...rest, and(40, 4, 12), store(40)], locals: 41 };

  it('holds an operation in place that frees registers', () => {
    const steps = anchored(plan, 4).steps;
    expect(steps.filter((step) => !plan.steps.includes(step))).toEqual([
      { kind: 'store', from: 4, region: Region.Scratch, slot: ANCHOR_SLOT },
    ]);
    expect(spillsOf(steps, 4)).toBeLessThan(spillsOf(plan.steps, 4));
  });

  it('leaves alone what fits the registers', () => expect(anchored(plan, 15)).toBe(plan));

  it('saves instructions in sha256', () => {
    const design = ownDesign('sha256');
    const program = laneProgramsOf(design, 128).programs[0]!;
    // As one block: no result is stored for later ones, which would hold it in place.
    const wires = new Int32Array(program.op.length).fill(-1);
    const planning = { ...planningOf(program, design.layout), wires };
    const plan = planBlock(planning, 0, program.op.length, 28);
    const held = anchored(plan, 15);
    const added = held.steps.length - plan.steps.length;
    expect(added).toBeGreaterThan(0);
    expect(spillsOf(held.steps, 15) + added).toBeLessThan(spillsOf(plan.steps, 15));
  });
});

describe('windows', () => {
  it('lead every access to its place', () => {
    const access = fc.record({
      region: fc.integer({ min: 0, max: 4 }),
      slot: fc.oneof(fc.nat(30), fc.nat(2000)),
    });
    fc.assert(
      fc.property(fc.array(access, { maxLength: 200 }), fc.constantFrom(4, 8, 16), (all, bytes) => {
        const steps = all.map(({ region, slot }): Step => ({ kind: 'load', to: 0, region, slot }));
        const windows = new Windows(steps, bytes, 5);
        const moved = new Map<number, { region: number; by: number }>();
        for (const { region, slot } of all) {
          const { address, move } = windows.access(region);
          if (move !== undefined) moved.set(move.pointer, move);
          const window = address.pointer < 5 ? { region, by: 0 } : moved.get(address.pointer)!;
          expect(window.region).toBe(region);
          expect(window.by + address.offset).toBe(slot * bytes);
          expect(address.offset).toBeGreaterThanOrEqual(0);
        }
      }),
      { seed: 52, numRuns: 100 },
    );
  });

  it('make accesses near that follow one another', () => {
    const steps = Array.from({ length: 64 }, (_, slot): Step => {
      return { kind: 'store', from: 0, region: Region.Next, slot: 100 + slot };
    });
    const windows = new Windows(steps, 16, 5);
    const offsets = steps.map(() => windows.access(Region.Next).address.offset);
    expect(Math.max(...offsets)).toBeLessThan(128);
  });
});
