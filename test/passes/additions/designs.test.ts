import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import { compile, packedProgramsOf } from '../../../compiler/compile.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { localEmitter } from '../../../compiler/emit/emitter.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { VectorOp } from '../../../compiler/program/vectorCode.js';
import { WasmEngine } from '../../../runtime/wasmEngine.js';
import { courseOf } from '../../support/engines.js';
import { designFrom, ownDesign } from '../../support/ownCircuits.js';
import { randomRows } from '../../support/responses.js';

const CYCLES = 60;
const emitter = localEmitter();

const modules: Readonly<Record<string, string>> = {
  accumulator: `module accumulator(input clk, input reset, input enable, input [31:0] d,
      output reg [31:0] total, output reg overflow);
    wire [32:0] sum = total + d;
    always @(posedge clk)
      if (reset) begin total <= 0; overflow <= 0; end
      else if (enable) begin total <= sum[31:0]; overflow <= sum[32]; end
  endmodule`,
  'up/down counter': `module counter(input clk, input load, input enable, input up, input [31:0] d,
      output reg [31:0] q, output last);
    always @(posedge clk) if (load) q <= d; else if (enable) q <= up ? q + 1 : q - 1;
    assign last = &q;
  endmodule`,
  timer: `module timer(input clk, input reset, input set, input [31:0] limit, input [31:0] mark,
      output reg [31:0] t, output reg alarm, output early);
    reg [31:0] kept_limit, kept_mark;
    always @(posedge clk)
      if (reset) begin t <= 0; kept_limit <= 0; kept_mark <= 0; alarm <= 0; end
      else begin
        if (set) begin kept_limit <= limit; kept_mark <= mark; end
        alarm <= t == kept_limit;
        t <= t == kept_limit ? 0 : t + 1;
      end
    assign early = t < kept_mark;
  endmodule`,
  'multiplier and subtractor': `module products(input clk, input clear, input [15:0] a, input [15:0] b,
      output reg [31:0] total, output reg [31:0] rest);
    always @(posedge clk) begin
      total <= clear ? 0 : total + a * b;
      rest <= total - {a, b};
    end
  endmodule`,
};

describe('designs with arithmetic', () => {
  const designs = [
    ...Object.entries(modules).map(
      ([name, text]) => [name, () => designFrom(new Source('design.v', text))] as const,
    ),
    ...['counter'].map((name) => [name, () => ownDesign(name)] as const),
  ];

  it.each(designs)('add numbers and give the response of the reference: %s', async (_, read) => {
    const design = read();
    const state = powerUpState(design.circuit, 'zero');
    const { steps } = packedProgramsOf(design, state).programs[0]!.vectors!;
    expect(steps.some(({ op }) => op === VectorOp.Add)).toBe(true);
    const engine = await WasmEngine.create(await compile(design, emitter, { start: state }));
    const rows = randomRows(design.layout, 5, CYCLES);
    const expected = courseOf(new ReferenceEngine(design.circuit, design), state, rows, CYCLES);
    expect(courseOf(engine, state, rows, CYCLES)).toEqual(expected);
  });
});
