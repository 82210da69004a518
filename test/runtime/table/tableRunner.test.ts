import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compile, type Design, designOf } from '../../../compiler/compile.js';
import { Diagnostics } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { rowStride } from '../../../runtime/layout.js';
import { loadStates } from '../../../runtime/stateBits.js';
import { type TableExports, TableRunner, tableBytes } from '../../../runtime/table/tableRunner.js';
import { WasmEngine } from '../../../runtime/wasmEngine.js';
import { randomCircuit } from '../../support/randomCircuit.js';
import { randomRows } from '../../support/responses.js';

const SEED = 20260803;

/** A runner of its own module, which counts the cycles that straight-line code runs. */
class CountedRunner {
  straightCycles = 0;
  readonly runner: TableRunner;
  readonly #design: Design;
  readonly #memory: WebAssembly.Memory;
  readonly #rows: number;

  private constructor(
    design: Design,
    runner: TableRunner,
    memory: WebAssembly.Memory,
    rows: number,
  ) {
    this.#design = design;
    this.runner = runner;
    this.#memory = memory;
    this.#rows = rows;
  }

  static async create(design: Design): Promise<CountedRunner> {
    const model = await compile(design);
    const { instance } = await WebAssembly.instantiate(model.bytes);
    const exports = instance.exports as unknown as TableExports;
    const { memory, current, runTable } = exports;
    const rows = model.memory.buffers;
    const table = rows + (1 << 20);
    memory.grow(Math.ceil((table + tableBytes(model)) / 65536));
    const start = loadStates(model.layout, model, new Uint8Array(model.layout.stateNames.length));
    new Uint8Array(memory.buffer).set(start, current.value);
    let made: CountedRunner;
    const run: TableExports['run'] = (...places) => {
      const ran = exports.run(...places);
      made.straightCycles += ran;
      return ran;
    };
    const runner = new TableRunner(model, { memory, current, runTable, run }, table);
    made = new CountedRunner(design, runner, memory, rows);
    return made;
  }

  run(cycles: number, stimulus: Uint32Array): Uint32Array {
    const { inputs, outputs, threeValued } = this.#design.layout;
    const [step, stride] = [inputs, outputs].map((row) => 4 * rowStride(row, threeValued));
    const memory = new Uint32Array(this.#memory.buffer);
    memory.set(stimulus.subarray(0, (cycles * step!) / 4), this.#rows / 4);
    const response = this.#rows + (1 << 19);
    expect(this.runner.run(cycles, this.#rows, step!, response, stride!)).toBe(cycles);
    return memory.slice(response / 4, (response + cycles * stride!) / 4);
  }
}

const designNamed = (text: string): Design =>
  designOf(readNetlist([new Source('m.v', text)], {}, new Diagnostics())!);

const counter = (bits: number, more: string): Design =>
  designNamed(`module m(input clk, ${more});
  reg [${bits - 1}:0] q = 0;
  always @(posedge clk) q <= q + 1;
  assign y = q;
endmodule
`);

const bytesOf = ({ buffer, byteOffset, byteLength }: Uint32Array): Buffer =>
  Buffer.from(buffer, byteOffset, byteLength);

/** Runs a design both ways; returns the runner. Every block is compared. */
async function compared(design: Design, cycles: number, block: number): Promise<CountedRunner> {
  const counted = await CountedRunner.create(design);
  const engine = await WasmEngine.create(await compile(design), undefined, { usesTable: false });
  const stride = rowStride(design.layout.inputs, false);
  const response = new Uint32Array(block * rowStride(design.layout.outputs, false));
  for (let done = 0; done < cycles; done += block) {
    const rows = randomRows(design.layout, done, block);
    engine.run(block, rows, stride, response);
    expect(bytesOf(counted.run(block, rows)).equals(bytesOf(response))).toBe(true);
  }
  return counted;
}

describe('TableRunner', () => {
  it('runs straight-line code once for each state and inputs that come', () =>
    fc.assert(
      fc.asyncProperty(
        randomCircuit({ maxInputs: 2, maxWidth: 2, maxRegisters: 5 }),
        fc.nat(1e6),
        async (circuit, seed) => {
          const design = designOf(circuit);
          const cycles = 1000;
          const rows = randomRows(design.layout, seed, cycles);
          const counted = await CountedRunner.create(design);
          counted.run(cycles, rows);
          const engine = await WasmEngine.create(await compile(design));
          const { words } = design.layout.inputs;
          const seen = new Set<string>();
          for (let cycle = 0; cycle < cycles; cycle++) {
            const row = rows.subarray(cycle * words, (cycle + 1) * words);
            seen.add(`${engine.state().join('')} ${row.join()}`);
            engine.run(1, row, 0, undefined);
          }
          // States that differ where nothing looks may be one.
          expect(counted.straightCycles).toBeLessThanOrEqual(seen.size);
          expect(counted.runner.isOver).toBe(false);
        },
      ),
      { seed: SEED, numRuns: 40 },
    ));

  it('hands over to straight-line code where there are too many states', async () => {
    const design = counter(6, 'input [11:0] a, output [5:0] y, output z); assign z = ^(a & {q, q}');
    const counted = await compared(design, 3000, 100);
    expect(counted.runner.isOver).toBe(true);
  });

  it('hands over to straight-line code where there are too many response rows', async () => {
    const counted = await compared(counter(11, 'output [2047:0] y'), 3000, 500);
    expect(counted.runner.isOver).toBe(true);
  });

  it('learns a long repetition in the course of time', async () => {
    const counted = await compared(counter(14, 'output [13:0] y'), 4_500_000, 100_000);
    const before = counted.straightCycles;
    expect(before).toBeGreaterThan(4_000_000);
    counted.run(100_000, new Uint32Array(0));
    expect(counted.straightCycles).toBe(before);
    expect(counted.runner.isOver).toBe(false);
  });
});
