import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { designOf, packedProgramsOf } from '../../compiler/compile.js';
import type { Literal, Logic } from '../../compiler/logic/logic.js';
import { LogicBuilder } from '../../compiler/logic/logicBuilder.js';
import { growPacks } from '../../compiler/passes/packWords/growPacks.js';
import { NO_NODE } from '../../compiler/passes/packWords/packs.js';
import { breakCircles, stagesOf } from '../../compiler/passes/packWords/units.js';
import { isNumber, VectorOp } from '../../compiler/program/vectorCode.js';
import { expectAgreement } from '../support/agreement.js';
import { logicOf } from '../support/logic.js';
import { randomWords } from '../support/randomWords.js';

const CYCLES = 40;

describe('packed programs', () => {
  it('give the response and the state of the reference', async () => {
    const seen = new Map<number, number>();
    const agrees = fc.asyncProperty(
      randomWords(),
      fc.boolean(),
      fc.nat(1e6),
      async (circuit, threeValued, seed) => {
        const design = designOf(circuit, { threeValued });
        for (const { op } of packedProgramsOf(design).programs[0]!.vectors?.steps ?? []) {
          seen.set(op, (seen.get(op) ?? 0) + 1);
        }
        await expectAgreement(design, seed, CYCLES);
      },
    );
    await fc.assert(agrees, { seed: 7, numRuns: 60 });
    // The law says nothing about vectors that no circuit has.
    const vectorOps = (ops: Iterable<number>): number[] =>
      [...ops].filter((op) => !isNumber(op)).sort((p, q) => p - q);
    expect(vectorOps(seen.keys())).toEqual(vectorOps(Object.values(VectorOp)));
  });
});

describe('growPacks', () => {
  it('puts each node in one lane of one pack, and nodes of one operation in each pack', () => {
    fc.assert(
      fc.property(randomWords(), fc.boolean(), (circuit, threeValued) => {
        const logic = logicOf(circuit, { threeValued });
        const packs = growPacks(logic);
        const found = new Set<number>();
        for (const [number, pack] of packs.standing()) {
          for (const [lane, node] of pack.nodes.entries()) {
            if (node === NO_NODE) continue;
            expect(logic.op[node]).toBe(pack.op);
            expect([packs.packOf[node], packs.laneOf[node]]).toEqual([number, lane]);
            expect(found.has(node)).toBe(false);
            found.add(node);
          }
        }
      }),
      { seed: 11, numRuns: 60 },
    );
  });
});

describe('growPacks on a large graph', () => {
  const OPERATIONS = 24_000;
  const INPUTS = 640;

  /** Operation i reads what `reads` says of the values so far: the inputs, then the operations. */
  function graph(reads: (i: number) => readonly [number, number], isAnd: (i: number) => boolean) {
    const logic = new LogicBuilder({ share: false, fold: false, recover: false });
    const values: Literal[] = Array.from({ length: INPUTS }, (_, i) => logic.input(i));
    for (let i = 0; i < OPERATIONS; i++) {
      const [p, q] = reads(i).map((at) => values[at]!) as [Literal, Literal];
      values.push(isAnd(i) ? logic.and(p, logic.not(q)) : logic.xor(p, q));
    }
    const columns = logic.take();
    return {
      ...columns,
      nodeCount: columns.op.length,
      inputCount: INPUTS,
      outputs: values.slice(-INPUTS),
      ...{ next: [], states: [], updates: [], writes: [], faults: [] },
    } satisfies Logic;
  }

  // Numerical Recipes' linear congruential generator.
  function randomNumbers(): (below: number) => number {
    let random = 1;
    return (below) => {
      random = (Math.imul(random, 1664525) + 1013904223) >>> 0;
      return Math.floor((random / 2 ** 32) * below);
    };
  }

  it('packs words', () => {
    // Each step takes the word before and the same word turned by one bit.
    const word = (i: number): number => i - (i % INPUTS);
    const packs = growPacks(
      graph(
        (i) => [i, word(i) + ((i + 1) % INPUTS)],
        (i) => (i / INPUTS) % 2 < 1,
      ),
    );
    const packed = packs.packOf.filter((pack) => pack >= 0).length;
    expect(packed).toBeGreaterThan(0.9 * OPERATIONS);
  });

  it('does not try where little repeats', () => {
    const random = randomNumbers();
    const packs = growPacks(
      graph(
        (i) => [random(INPUTS + i), random(INPUTS + i)],
        () => random(2) === 0,
      ),
    );
    expect(packs.count).toBe(0);
  });
});

describe('breakCircles', () => {
  it('leaves packs that each stand behind what they need', () => {
    fc.assert(
      fc.property(randomWords(), (circuit) => {
        const packs = growPacks(logicOf(circuit));
        breakCircles(packs);
        const order = stagesOf(packs).packOrder;
        const place = new Map(order.map((pack, i) => [pack, i]));
        for (const [number, pack] of packs.standing()) {
          if (!place.has(number)) continue;
          const needed = pack.op < 3 ? [] : pack.operands.flat().filter((literal) => literal >= 0);
          for (const literal of needed) {
            const below = packs.packOf[literal >>> 1]!;
            if (below >= 0) expect(place.get(below)!).toBeLessThan(place.get(number)!);
          }
        }
      }),
      { seed: 13, numRuns: 60 },
    );
  });
});
