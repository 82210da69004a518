import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, designOf, packedProgramsOf } from '../../compiler/compile.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { canHold } from '../../compiler/emit/heldLoop.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { rowStride } from '../../runtime/layout.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';

const emitter = localEmitter();
const CYCLES = 60;

describe('a state that is held in locals', () => {
  it('gives responses and states as the reference does, however many cycles a call runs', async () => {
    let heldCount = 0;
    const agrees = fc.asyncProperty(
      randomCircuit({ maxRegisters: 6, maxGates: 25, maxWidth: 2, unknowns: true }),
      fc.boolean(),
      fc.array(fc.integer({ min: 1, max: 7 }), { minLength: 1, maxLength: 12 }),
      fc.nat(1e6),
      async (circuit, threeValued, calls, seed) => {
        const design = designOf(circuit, { threeValued });
        const { layout } = design;
        if (canHold(packedProgramsOf(design))) heldCount++;
        const start = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const rows = randomRows(layout, seed, CYCLES);
        const strides = [layout.inputs, layout.outputs].map((row) => rowStride(row, threeValued));
        const [step, width] = strides as [number, number];
        const model = await compile(design, emitter);
        const engine = await WasmEngine.create(model, undefined, { usesTable: false });
        const reference = new ReferenceEngine(circuit, design);
        for (const each of [engine, reference]) each.reset(start);
        let done = 0;
        for (const cycles of calls) {
          if (done + cycles > CYCLES) break;
          const [own, expected] = [engine, reference].map((each) => {
            const response = new Uint32Array(cycles * width);
            each.run(cycles, rows.subarray(done * step), step, response);
            return { response, state: each.state() };
          });
          expect(own).toEqual(expected);
          done += cycles;
        }
      },
    );
    await fc.assert(agrees, { seed: 51, numRuns: 30 });
    // Without circuits that are small enough, nothing has been shown.
    expect(heldCount).toBeGreaterThan(5);
  });
});
