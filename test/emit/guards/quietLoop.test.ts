import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import { compile, type Design, designOf } from '../../../compiler/compile.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import type { EmitOptions } from '../../../compiler/emit/emitModel.js';
import { localEmitter } from '../../../compiler/emit/emitter.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { type ModelLayout, rowStride } from '../../../runtime/layout.js';
import { WasmEngine } from '../../../runtime/wasmEngine.js';
import { designFrom } from '../../support/ownCircuits.js';
import { randomCircuit } from '../../support/randomCircuit.js';
import { randomWords } from '../../support/randomWords.js';
import { randomRows } from '../../support/responses.js';
import { storyOf } from '../../support/tableMachines.js';

const SEED = 20261203;
const CYCLES = 400;
const emitter = localEmitter();

async function engineOf(design: Design, options: EmitOptions = {}): Promise<WasmEngine> {
  return WasmEngine.create(await compile(design, emitter, options), undefined, {
    usesTable: false,
  });
}

/** Random rows, each held for some cycles. */
function heldRows(layout: ModelLayout, seed: number, holds: readonly number[]): Uint32Array {
  const stride = rowStride(layout.inputs, layout.threeValued);
  const drawn = randomRows(layout, seed, CYCLES);
  const rows = new Uint32Array(CYCLES * stride);
  for (let cycle = 0, change = 0, left = holds[0]!; cycle < CYCLES; cycle++, left--) {
    if (left === 0) left = holds[++change % holds.length]!;
    rows.set(drawn.subarray(change * stride, (change + 1) * stride), cycle * stride);
  }
  return rows;
}

const step = fc.oneof(
  {
    weight: 4,
    arbitrary: fc.record({ do: fc.constant('run'), cycles: fc.nat(90), observed: fc.boolean() }),
  },
  fc.record({ do: fc.constant('hold'), cycles: fc.nat(90) }),
  fc.record({ do: fc.constantFrom('look', 'reset', 'save', 'restore') }),
);
// As many cycles as there are rows for, even if all are run.
const steps = fc.array(step as fc.Arbitrary<Parameters<typeof storyOf>[3][number]>, {
  maxLength: 4,
});
const holds = fc.array(fc.oneof(fc.constant(1), fc.integer({ min: 1, max: 60 })), {
  minLength: 1,
  maxLength: 6,
});

let passedOver = 0;

const equals = (
  circuits: fc.Arbitrary<Circuit>,
  threeValued: boolean,
  numRuns: number,
  toReference = true,
) =>
  fc.assert(
    fc.asyncProperty(circuits, fc.nat(1e6), holds, steps, async (circuit, seed, held, story) => {
      const design = designOf(circuit, { threeValued });
      const rows = heldRows(design.layout, seed, held);
      const start = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
      const plain = await engineOf(design, { passes: { guards: false } });
      const expected = storyOf(plain, start, rows, story);
      expect(plain.quietCycles).toBe(0);
      const guarded = await engineOf(design);
      expect(storyOf(guarded, start, rows, story)).toEqual(expected);
      passedOver += guarded.quietCycles;
      if (!toReference) return;
      const reference = new ReferenceEngine(circuit, design);
      expect(storyOf(reference, start, rows, story)).toEqual(expected);
    }),
    { seed: SEED, numRuns },
  );

describe('passing over what does not change gives what running it gives, and the reference', () => {
  const small = { maxInputs: 3, maxWidth: 3, maxRegisters: 5, maxGates: 20 };

  it('with set, reset and latches', () =>
    equals(randomCircuit({ ...small, asynchronous: true, latches: true }), false, 10));
  it('with words', () => equals(randomWords(), false, 8));
  it('with memories', () => equals(randomCircuit({ ...small, memories: true }), false, 24));
  it('with loops', () => equals(randomCircuit({ ...small, loops: true }), false, 12, false));
  it('with three values', () =>
    equals(randomCircuit({ ...small, memories: true, unknowns: true }), true, 12));
  it('and does pass over much', () => expect(passedOver).toBeGreaterThan(2000));
});

const designOfText = (text: string): Design => designFrom(new Source('t.v', text));

describe('a circuit at rest', () => {
  const design = designOfText(`module t(input clk, input en, input [7:0] d, output reg [7:0] q);
    initial q = 0;
    always @(posedge clk) if (en) q <= d; else if (q != 0) q <= q - 1;
  endmodule`);

  it('is passed over, seen and unseen, until an input changes', async () => {
    const engine = await engineOf(design);
    // Bit 0 is `en`, then comes `d`: after 200 cycles, q takes 9.
    const rows = Uint32Array.from({ length: 300 }, (_, i) => (i < 200 ? 0 : 1 | (9 << 1)));
    const response = new Uint32Array(300);
    engine.run(300, rows, 1, response);
    expect([...response]).toEqual(Array.from(rows.keys(), (i) => (i <= 200 ? 0 : 9)));
    expect(engine.quietCycles).toBeGreaterThan(280);
    engine.run(10_000, rows, 0, undefined);
    expect(engine.quietCycles).toBeGreaterThan(10_000);
    expect(engine.state()).toEqual(new Uint8Array(8));
  });

  it('is noticed by short calls after a busy time', async () => {
    const engine = await engineOf(design);
    engine.run(
      1000,
      Uint32Array.from({ length: 1000 }, (_, i) => 1 | (i << 1)),
      1,
      undefined,
    );
    expect(engine.quietCycles).toBe(0);
    for (let call = 0; call < 50; call++) engine.run(20, new Uint32Array([1]), 0, undefined);
    expect(engine.quietCycles).toBeGreaterThan(800);
  });

  it('is not where it writes to a memory', async () => {
    const counting = designOfText(`module t(input clk, input [3:0] at, output [7:0] y);
      reg [7:0] count [0:15];
      integer i;
      initial for (i = 0; i < 16; i = i + 1) count[i] = 0;
      always @(posedge clk) count[at] <= count[at] + 1;
      assign y = count[at];
    endmodule`);
    const engine = await engineOf(counting);
    const response = new Uint32Array(200);
    engine.run(200, new Uint32Array([3]), 0, response);
    expect([...response]).toEqual(Array.from(response.keys()));
    expect(engine.quietCycles).toBe(0);
  });

  it('is run where clocks have their own pace, or a state is looked for', async () => {
    const clocks = designOfText(`module t(input a, input b, output reg p, output reg q);
      initial begin p = 0; q = 0; end
      always @(posedge a) p <= q;
      always @(posedge b) q <= p;
    endmodule`);
    const timings = [
      { port: 'a', period: 2, offset: 0 },
      { port: 'b', period: 3, offset: 0 },
    ];
    const twoClocks = designOf(clocks.circuit, { timings });
    for (const engine of [
      await engineOf(twoClocks),
      await engineOf(design, { comparesState: true }),
    ]) {
      engine.run(100, new Uint32Array([0]), 0, undefined);
      expect(engine.quietCycles).toBe(0);
    }
  });
});
