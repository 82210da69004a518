import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../../../compiler/circuit/powerUp.js';
import { designOf } from '../../../../compiler/compile.js';
import { RandomBits } from '../../../../runtime/random.js';
import { courseOf, enginesOf } from '../../../support/engines.js';
import { type PortValues, packValues, playValues } from '../../../support/portValues.js';
import { firstDifference, randomRows } from '../../../support/responses.js';
import { circuitOf } from './reading.js';

/** Registers and an adder around one bus with a keeper, whose drivers lie two levels deep. */
const machine = `
  module keeper (inout p); wire n; not (n, p); not (weak0, weak1) (p, n); endmodule
  module cell_reg (input clk, load, show, inout p);
    reg q = 0;
    always @(posedge clk) if (load) q <= p;
    bufif1 (p, q, show);
  endmodule
  module register (input clk, load, show, inout [3:0] bus);
    cell_reg bits [3:0] (clk, load, show, bus);
  endmodule
  module machine (input clk, input [3:0] d, input [1:0] from, to, input none, output [3:0] seen, sum);
    wire [3:0] bus;
    wire [3:0] total;
    keeper k [3:0] (bus);
    register r0 (clk, to == 0, from == 0 & ~none, bus), r1 (clk, to == 1, from == 1 & ~none, bus);
    assign bus = none ? 4'bz : from == 2 ? total : from == 3 ? d : 4'bz;
    assign total = {r0.bits[3].q, r0.bits[2].q, r0.bits[1].q, r0.bits[0].q} +
      {r1.bits[3].q, r1.bits[2].q, r1.bits[1].q, r1.bits[0].q};
    assign seen = bus;
    assign sum = total;
  endmodule`;

const CYCLES = 500;

function stimulus(): PortValues[] {
  const bits = new RandomBits(11);
  const words = new Uint32Array(CYCLES);
  bits.fill(words, 0, CYCLES);
  return Array.from(words, (word) => ({
    d: word & 15,
    from: (word >> 4) & 3,
    to: (word >> 6) & 3,
    none: (word >> 8) & 1,
  }));
}

/** What the bus shows in each cycle; after the edge it follows a register that has changed. */
function model(rows: readonly PortValues[]): number[] {
  const registers = [0, 0];
  let bus = 0;
  const driven = ({ d, from, none }: PortValues): number => {
    const sum = (registers[0]! + registers[1]!) & 15;
    return none === 1 ? bus : [registers[0]!, registers[1]!, sum, Number(d)][Number(from)]!;
  };
  return rows.map((row) => {
    const seen = driven(row);
    bus = seen;
    if (Number(row.to) < 2) registers[Number(row.to)] = seen;
    bus = driven(row);
    return seen;
  });
}

describe('a bus with a keeper', () => {
  const design = designOf(circuitOf(machine));

  it('shows on every engine what drives it, or did last', async () => {
    const { reference, others } = await enginesOf(design);
    const rows = stimulus();
    const expected = model(rows);
    expect(packValues(design.layout, rows)).toHaveLength(CYCLES);
    for (const [name, engine] of [['reference', reference] as const, ...others]) {
      const read = playValues(engine, rows);
      const seen = rows.map((_, cycle) => Number(read('seen', cycle)));
      expect(seen, name).toEqual(expected);
    }
  });

  it('runs the same on all engines with x', async () => {
    const unknown = designOf(design.circuit, { threeValued: true });
    const { reference, others } = await enginesOf(unknown);
    const rows = randomRows(unknown.layout, 3, CYCLES);
    const state = powerUpState(design.circuit, 'unknown');
    const expected = courseOf(reference, state, rows, CYCLES);
    for (const [name, engine] of others) {
      const course = courseOf(engine, state, rows, CYCLES);
      expect(firstDifference(unknown.layout, course.response, expected.response), name).toBe(
        undefined,
      );
    }
  });
});
