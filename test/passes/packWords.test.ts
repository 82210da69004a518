import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf, packedProgramsOf } from '../../compiler/compile.js';
import { growPacks } from '../../compiler/passes/packWords/growPacks.js';
import { NO_NODE } from '../../compiler/passes/packWords/packs.js';
import { breakCircles, stagesOf } from '../../compiler/passes/packWords/units.js';
import { VectorOp } from '../../compiler/program/vectorCode.js';
import { courseOf, enginesOf } from '../support/engines.js';
import { logicOf } from '../support/logic.js';
import { randomWords } from '../support/randomWords.js';
import { randomRows } from '../support/responses.js';

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
        const rows = randomRows(design.layout, seed, CYCLES);
        const state = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const { reference, others } = await enginesOf(design);
        const expected = courseOf(reference, state, rows, CYCLES);
        for (const [name, engine] of others) {
          expect(courseOf(engine, state, rows, CYCLES), name).toEqual(expected);
        }
      },
    );
    await fc.assert(agrees, { seed: 7, numRuns: 60 });
    // The law says nothing about vectors that no circuit has.
    expect([...seen.keys()].sort((p, q) => p - q)).toEqual(Object.values(VectorOp));
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
