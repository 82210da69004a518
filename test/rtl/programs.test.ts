import fc from 'fast-check';
import { describe, it } from 'vitest';
import type { EngineName } from '../../compiler/engines.js';
import { expectModel, type Model, randomInputs, rtlDesign } from './circuits.js';
import { declarations, type Program, programs, type State, variables } from './randomProgram.js';

/** A module that runs a program at each clock edge. */
const moduleOf = (program: Program): string => `
  module run (input clk, rst, input [3:0] a, b, output reg [3:0] p, q, r, t, output [15:0] all);
    ${declarations}
    initial begin m[0] = 1; m[1] = 3; m[2] = 9; m[3] = 14; {p, q, r, t} = 16'h1247; end
    assign all = {m[3], m[2], m[1], m[0]};
    always @(posedge clk or posedge rst)
      if (rst) begin p <= 4'd9; q <= 2; r = 3; t = 12; end
      else ${program.text([], '')}
  endmodule`;

const modelOf = (program: Program) => (): Model => {
  const state: State = {
    now: { p: 1, q: 2, r: 4, t: 7 },
    memory: [1, 3, 9, 14],
    later: [],
    left: undefined,
  };
  return ({ rst, ...inputs }) => {
    Object.assign(state.now, inputs, rst === 1 && { p: 9, q: 2, r: 3, t: 12 });
    const outputs = {
      ...Object.fromEntries(variables.map((name) => [name, state.now[name]!])),
      all: state.memory.reduce((word, nibble, i) => word | (nibble << (4 * i)), 0),
    };
    if (rst === 1) return outputs;
    program.run(state, 0);
    for (const write of state.later.splice(0)) write();
    return outputs;
  };
};

// Compiling each program to WebAssembly takes most of the time.
const courses: readonly (readonly [EngineName, number])[] = [
  ['reference', 24],
  ['bytecode', 12],
  ['wasm', 3],
];

describe('random programs', () => {
  it.each(courses)('leave at each clock edge what their statements say, on %s', (engine, numRuns) =>
    fc.assert(
      fc.asyncProperty(programs, fc.nat(1e6), async (program, seed) => {
        const design = rtlDesign([], moduleOf(program));
        const rows = randomInputs(design, seed, 40, (_, chance) => ({ rst: chance(12) ? 1 : 0 }));
        await expectModel(design, modelOf(program), rows, [engine]);
      }),
      { seed: 40, numRuns },
    ),
  );
});
