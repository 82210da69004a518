import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import type { EngineName } from '../../compiler/engines.js';
import { createEngine } from '../../compiler/engines.js';
import { PeriodSearch, REPEATS } from '../../compiler/period/periodSearch.js';
import { repeatedRows } from '../../compiler/run/repeatedRows.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import type { RunRecorder, RunStart } from '../../compiler/run/runRecorder.js';
import { rowStride } from '../../runtime/layout.js';
import { BlockRecorder, freshRecord, momentsOf } from '../record/recordings.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';

const SEED = 20260422;

/** Looks for a period with the inputs held at what a row says, or with rows that come again. */
async function search(
  design: Design,
  { rows, engine = 'bytecode' }: { rows?: Uint32Array; engine?: EngineName } = {},
  cycles = Number.MAX_SAFE_INTEGER,
) {
  const stride = rowStride(design.layout.inputs, design.layout.threeValued);
  const period = new PeriodSearch(rows === undefined ? {} : { rows });
  const powerUp = design.layout.threeValued ? ('unknown' as const) : ('random' as const);
  return runDesign(design, {
    stimulus: rows === undefined ? period.over([]) : repeatedRows(rows, stride),
    ...{ cycles, engine, powerUp, seed: 1 },
    outlets: [period.plan],
  });
}

/** The same by remembering every state with the place of the rows. */
async function bruteForce(design: Design, rows: Uint32Array, first: number) {
  const stride = rowStride(design.layout.inputs, design.layout.threeValued);
  const count = stride === 0 ? 1 : rows.length / stride;
  const { length } = design.schedule.pattern;
  const engine = await createEngine(design, 'reference');
  const powerUp = design.layout.threeValued ? ('unknown' as const) : ('random' as const);
  engine.reset(powerUpState(design.circuit, powerUp, 1));
  const known = new Map<string, number>();
  for (let cycle = 0; ; cycle++) {
    if (cycle >= first) {
      const places = `${cycle % count} ${cycle % length}`;
      const key = `${places} ${engine.state().join('')} ${engine.memoryState().join()}`;
      const before = known.get(key);
      if (before !== undefined) return { leadIn: before, period: cycle - before };
      known.set(key, cycle);
    }
    const at = stride === 0 ? 0 : (cycle * stride) % rows.length;
    engine.run(1, rows.subarray(at, at + stride), 0, undefined);
  }
}

describe('the period of a run', () => {
  it.each(['wasm', 'bytecode', 'reference'] as const)(
    'is what remembering all states finds, with inputs held (%s)',
    (engine) =>
      fc.assert(
        fc.asyncProperty(
          randomCircuit({ maxRegisters: 9, clocking: 'edges', asynchronous: true }),
          fc.boolean(),
          async (circuit, threeValued) => {
            const design = designOf(circuit, { threeValued });
            const held = new Uint32Array(rowStride(design.layout.inputs, threeValued));
            const { repetition } = await search(design, { engine });
            expect(repetition).toEqual(await bruteForce(design, held, 0));
          },
        ),
        { seed: SEED, numRuns: engine === 'wasm' ? 8 : 15 },
      ),
  );

  it('is what remembering all states finds, with rows that come again and two clocks', () =>
    fc.assert(
      fc.asyncProperty(
        randomCircuit({ maxRegisters: 7, clocking: 'twoClocks', latches: true }),
        fc.integer({ min: 1, max: 6 }),
        fc.nat(1e6),
        async (circuit, count, seed) => {
          const timings = [
            { port: 'clk', period: 2, offset: 0 },
            { port: 'clk2', period: 3, offset: 1 },
          ];
          const design = designOf(circuit, { timings });
          const rows = randomRows(design.layout, seed, count);
          const { repetition } = await search(design, { rows });
          expect(repetition).toEqual(await bruteForce(design, rows, 1));
        },
      ),
      { seed: SEED, numRuns: 25 },
    ));

  it('has a lead-in that is found however long it is', async () => {
    // Counts to 70,001, then round and round from 60,000 on.
    const design = designFrom(
      new Source(
        'rho.v',
        `module rho(input clk, output reg [16:0] n);
           initial n = 0;
           always @(posedge clk) n <= n == 17'd70001 ? 17'd60000 : n + 17'd1;
         endmodule`,
      ),
    );
    const summary = await search(design, { engine: 'wasm' });
    expect(summary.repetition).toEqual({ leadIn: 60_000, period: 10_002 });
    expect(summary.stopped?.reason).toBe(REPEATS);
  });

  it('of a maximal sequence is 2^n - 1', async () => {
    // ITU-T O.150, section 5: 2^20 - 1; the order 31 takes a minute.
    const summary = await search(ownDesign('prbs', { order: 20 }), { engine: 'wasm' });
    expect(summary.repetition).toEqual({ leadIn: 0, period: 2 ** 20 - 1 });
  });

  it('includes memories: a state whose memory differs is another one', async () => {
    // A counter of two bits writes into four words; the words count to four, one after another.
    const design = designFrom(
      new Source(
        'store.v',
        `module store(input clk, output [1:0] y);
           reg [1:0] place; reg [1:0] word [0:3]; integer i;
           initial begin place = 0; for (i = 0; i < 4; i = i + 1) word[i] = 0; end
           assign y = word[place];
           always @(posedge clk) begin place <= place + 2'd1; word[place] <= y + 2'd1; end
         endmodule`,
      ),
    );
    for (const engine of ['wasm', 'bytecode', 'reference'] as const) {
      expect((await search(design, { engine })).repetition, engine).toEqual({
        leadIn: 0,
        period: 16,
      });
    }
  });

  it('is found by a search that goes on from a checkpoint', async () => {
    // Counts to 30,001, then round and round from 9,000 on.
    const design = designFrom(
      new Source(
        'rho.v',
        `module rho(input clk, output reg [14:0] n);
           initial n = 0;
           always @(posedge clk) n <= n == 15'd30001 ? 15'd9000 : n + 15'd1;
         endmodule`,
      ),
    );
    const run = (from?: RunStart, recorder?: RunRecorder) => {
      const period = new PeriodSearch();
      return runDesign(design, {
        stimulus: period.over([]),
        ...{ cycles: Number.MAX_SAFE_INTEGER, engine: 'bytecode', powerUp: 'zero', seed: 0 },
        outlets: [period.plan],
        ...(from && { from }),
        ...(recorder && { recorder }),
      });
    };
    const record = await freshRecord(design);
    const whole = await run(undefined, new BlockRecorder(record));
    expect(whole.repetition).toEqual({ leadIn: 9000, period: 21_002 });
    const moments = await momentsOf(record);
    expect(moments.length).toBeGreaterThan(3);
    for (const from of moments) {
      expect((await run(from)).repetition, `from ${from.cycle}`).toEqual(whole.repetition);
    }
  });

  it('is not looked for before the stimulus is over, and not found within too few cycles', async () => {
    const design = ownDesign('prbs', { order: 20 });
    const { repetition, notes, cycles } = await search(design, {}, 5000);
    expect({ repetition, cycles }).toEqual({ cycles: 5000 });
    expect(notes).toEqual(['no state came again in 5,000 cycles with the inputs held']);
  });
});
