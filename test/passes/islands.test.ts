import { describe, expect, it } from 'vitest';
import { packedProgramsOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { type Logic, LogicOp } from '../../compiler/logic/logic.js';
import { islandsOf } from '../../compiler/passes/packWords/islands.js';
import { logicOf } from '../support/logic.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';

/** Copies of a register of 256 bits that mixes with itself, in a chain, behind a plain register. */
function chain(copies: number): Logic {
  const stages = Array.from(
    { length: copies },
    (_, i) => `mixer m${i}(.clk(clk), .d(y[${i}]), .q(y[${i + 1}]));`,
  );
  const text = `module mixer(input clk, input d, output q);
    reg [255:0] r;
    assign q = r[255];
    always @(posedge clk) r <= {r[254:0], q ^ d} ^ (r & {r[127:0], r[255:128]})
      ^ ({r[6:0], r[255:7]} & ~{r[10:0], r[255:11]});
  endmodule
  module chain(input clk, input d, output q);
    wire [${copies}:0] y;
    reg first;
    always @(posedge clk) first <= d;
    assign y[0] = first, q = y[${copies}];
    ${stages.join('\n')}
  endmodule`;
  return logicOf(designFrom(new Source('chain.v', text), { top: 'chain' }).circuit);
}

/** The different numbers of a list. */
const numbersIn = (islands: Uint32Array): number[] => [...new Set(islands)].sort((p, q) => p - q);

describe('islandsOf', () => {
  const alike = (logic: Logic): Uint32Array => new Uint32Array(logic.nodeCount);
  const unlike = (logic: Logic): Uint32Array =>
    Uint32Array.from({ length: logic.nodeCount }, (_, i) => i);

  it('numbers what depends on itself, and nothing before or behind it', () => {
    const logic = chain(3);
    const islands = islandsOf(logic, alike(logic), 6);
    expect(numbersIn(islands)).toEqual([0, 1, 2, 3]);
    const states = [...islands].filter(
      (island, node) => island > 0 && logic.op[node] === LogicOp.State,
    );
    expect(states).toHaveLength(3 * 256);
  });

  it('finds few that do not repeat, and many that do', () => {
    const [few, many] = [chain(2), chain(8)];
    expect(numbersIn(islandsOf(few, unlike(few), 6))).toEqual([0, 1, 2]);
    expect(numbersIn(islandsOf(many, unlike(many), 6))).toEqual([0]);
    expect(numbersIn(islandsOf(many, alike(many), 6))).toHaveLength(9);
  });
});

describe('equal cores', () => {
  it('take hardly more operations each than one alone', () => {
    const operations = (cores: number): number => {
      const [program] = packedProgramsOf(ownDesign('aes128', { cores })).programs;
      return program!.op.length + program!.vectors!.steps.length;
    };
    expect(operations(2)).toBeLessThan(2.1 * operations(1));
  });
});
