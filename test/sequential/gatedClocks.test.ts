import { describe, it } from 'vitest';
import { cells } from '../published/partsCells.js';
import { expectSameResponse } from './clocking.js';
import { circuitFrom } from './courses.js';

/**
 * An accumulator that works while it is enabled, and a register that always does and through which
 * it reads itself: skew between the two clocks would show at once. `bank` says how the accumulator
 * is clocked and enabled.
 */
const machine = (bank: string) =>
  circuitFrom(`${cells}
    module always_on (input clk, input [15:0] d, output reg [15:0] q);
      always @(posedge clk) q <= d;
    endmodule
    ${bank}
    module machine (input clk, en, more, input [7:0] d, output [15:0] sum, free);
      wire [15:0] next = {sum[14:0], sum[15]} + (free ^ {d, d});
      always_on register (clk, sum + {8'b0, d}, free);
      bank enabled (clk, en, more, next, sum);
    endmodule`);

const gateCell = `
  module and_cell (input clk, en, output gated);
    not (low, clk);
    high_latch hold (open, low, en);
    and (gated, clk, open);
  endmodule`;

const byEnable = machine(`
  module bank (input clk, en, more, input [15:0] d, output reg [15:0] q);
    always @(posedge clk) if (en & more) q <= d;
  endmodule`);

describe('a bank of registers behind gating cells does what one with enables does', () => {
  it('with a latch and an AND gate', async () => {
    const gated = machine(`${gateCell}
      module bank (input clk, en, more, input [15:0] d, output [15:0] q);
        and_cell cell_1 (clk, en & more, gated);
        always_on register (gated, d, q);
      endmodule`);
    await expectSameResponse({ circuit: byEnable }, { circuit: gated }, 1);
  });

  it('with one cell behind another', async () => {
    const gated = machine(`${gateCell}
      module bank (input clk, en, more, input [15:0] d, output [15:0] q);
        and_cell outer (clk, en, some), inner (some, more, gated);
        always_on register (gated, d, q);
      endmodule`);
    await expectSameResponse({ circuit: byEnable }, { circuit: gated }, 2);
  });

  it('with an AND gate and an enable from the other edge', async () => {
    const gated = machine(`
      module bank (input clk, en, more, input [15:0] d, output [15:0] q);
        reg held;
        always @(negedge clk) held <= en & more;
        and (gated, clk, held);
        always_on register (gated, d, q);
      endmodule`);
    // The falling edge comes before the inputs of the next cycle.
    const late = machine(`
      module bank (input clk, en, more, input [15:0] d, output reg [15:0] q);
        reg held;
        always @(posedge clk) held <= en & more;
        always @(posedge clk) if (held) q <= d;
      endmodule`);
    await expectSameResponse({ circuit: late }, { circuit: gated }, 3);
  });

  const registered = (cell: string) =>
    machine(`
      module bank (input clk, en, more, input [15:0] d, output [15:0] q);
        reg stop;
        always @(posedge clk) stop <= ~(en & more);
        ${cell}
        always_on register (gated, d, q);
      endmodule`);
  const byRegisteredEnable = machine(`
    module bank (input clk, en, more, input [15:0] d, output reg [15:0] q);
      reg stop;
      always @(posedge clk) stop <= ~(en & more);
      always @(posedge clk) if (!stop) q <= d;
    endmodule`);

  it('with an OR gate', async () => {
    const gated = registered('or (gated, clk, stop);');
    await expectSameResponse({ circuit: byRegisteredEnable }, { circuit: gated }, 4);
  });

  it('with a latch and an OR gate', async () => {
    const gated = registered('high_latch hold (held, clk, stop); or (gated, clk, held);');
    await expectSameResponse({ circuit: byRegisteredEnable }, { circuit: gated }, 5);
  });
});
