import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { powerUpModes, powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { compact } from '../../compiler/passes/compact.js';
import { mergeRegisters } from '../../compiler/passes/mergeRegisters/mergeRegisters.js';
import { signaturesOf } from '../../compiler/passes/mergeRegisters/signatures.js';
import { startBits } from '../../compiler/passes/mergeRegisters/startBits.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { courseOf } from '../support/engines.js';
import { logicOf } from '../support/logic.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomWords } from '../support/randomWords.js';
import { randomRows } from '../support/responses.js';

const emitter = localEmitter();
const CYCLES = 60;

const circuits = fc.oneof(
  randomWords(),
  randomCircuit({ clocking: 'gated', latches: true, asynchronous: true, unknowns: true }),
);

function circuitOf(text: string): Circuit {
  const circuit = readNetlist([new Source('test.v', text)], {}, new Diagnostics());
  if (circuit === undefined) throw new Error('the netlist has errors');
  return circuit;
}

describe('a model made for one start', () => {
  it('runs from there as the reference does, and shows every register', async () => {
    let merged = 0;
    const agrees = fc.asyncProperty(
      circuits,
      fc.constantFrom(...powerUpModes),
      fc.nat(1e6),
      async (circuit, mode, seed) => {
        const design = designOf(circuit, { threeValued: mode === 'unknown' });
        const start = powerUpState(circuit, mode, seed);
        const model = await compile(design, emitter, { start });
        merged += model.derived?.length ?? 0;
        const rows = randomRows(design.layout, seed, CYCLES);
        const reference = new ReferenceEngine(circuit, design);
        const engine = await WasmEngine.create(model);
        expect(courseOf(engine, start, rows, CYCLES)).toEqual(
          courseOf(reference, start, rows, CYCLES),
        );
      },
    );
    await fc.assert(agrees, { seed: 3, numRuns: 60 });
    // Without any such register, nothing has been shown.
    expect(merged).toBeGreaterThan(100);
  });

  it('refuses a state that cannot follow from it', async () => {
    const circuit = circuitOf(`
      module twins(input clk, input d, output p, output q);
        reg p, q;
        always @(posedge clk) begin p <= d; q <= d; end
      endmodule`);
    const start = Uint8Array.of(0, 0);
    const model = await compile(designOf(circuit), emitter, { start });
    expect(model.derived).toHaveLength(1);
    const engine = await WasmEngine.create(model);
    engine.reset(Uint8Array.of(1, 1));
    expect(engine.state()).toEqual(Uint8Array.of(1, 1));
    expect(() => engine.reset(Uint8Array.of(0, 1))).toThrow(RangeError);
  });
});

describe('mergeRegisters', () => {
  it('finds registers that are equal, opposite or constant from the start on', () => {
    // The counters `a` and `b` count the same steps, `b` from the opposite side; `still` holds 1.
    const circuit = circuitOf(`
      module counters(input clk, input step, output x, output y, output z);
        reg [3:0] a, b;
        reg still;
        always @(posedge clk) begin
          a <= a + step;
          b <= ~(~b + step);
          still <= still | step & (a == b);
        end
        assign x = ^a, y = ^b, z = still;
      endmodule`);
    const logic = compact(logicOf(circuit));
    const names = designOf(circuit).layout.stateNames;
    const state = Uint8Array.from(names, (name) => Number(!name.startsWith('a')));
    const { logic: smaller, derived } = mergeRegisters(logic, startBits(logic.states, state));
    expect(smaller.states).toHaveLength(4);
    expect(derived.filter((bit) => bit.of === undefined)).toHaveLength(1);
    expect(derived.filter((bit) => bit.of !== undefined).every((bit) => bit.inverted)).toBe(true);
  });

  it('merges registers whose next values are equal and built differently', () => {
    const circuit = circuitOf(`
      module carries(input clk, input a, input b, output x, output y);
        reg p, q;
        always @(posedge clk) begin
          p <= (a & b) | (p & (a | b));
          q <= (a & b) | (q & (a ^ b));
        end
        assign x = p, y = q;
      endmodule`);
    const logic = compact(logicOf(circuit));
    const { derived } = mergeRegisters(logic, startBits(logic.states, Uint8Array.of(0, 0)));
    expect(derived).toMatchObject([{ inverted: false, of: logic.states[0] }]);
  });

  it('keeps registers apart that come to differ in one of very many cases only', () => {
    // No random simulation comes upon it: \`p\` and \`q\` look equal, and \`still\` constant.
    const circuit = circuitOf(`
      module rare(input clk, input [39:0] d, output x, output y, output z);
        reg p, q, still;
        always @(posedge clk) begin
          p <= d[0];
          q <= d[0] ^ &d;
          still <= still | &d;
        end
        assign x = p, y = q, z = still;
      endmodule`);
    const logic = compact(logicOf(circuit));
    const start = startBits(logic.states, Uint8Array.of(0, 0, 0));
    expect(new Set(signaturesOf(logic, start)).size).toBe(2);
    expect(mergeRegisters(logic, start).derived).toEqual([]);
  });

  it('takes registers that start differently for opposite ones', () => {
    const circuit = circuitOf(`
      module twins(input clk, input d, output p, output q);
        reg p, q;
        always @(posedge clk) begin p <= p ^ d; q <= q ^ d; end
      endmodule`);
    const logic = compact(logicOf(circuit));
    const apart = mergeRegisters(logic, startBits(logic.states, Uint8Array.of(0, 1)));
    // Opposite from the start on, and so for ever.
    expect(apart.derived).toMatchObject([{ inverted: true }]);
  });
});
