/** Adds `step` to `total` in every cycle, from 0 on; `clear` empties it. One gate of its own. */
export const accumulator = `
module accumulator (clk, clear, step, total, even);
  input clk, clear;
  input [3:0] step;
  output [7:0] total;
  output even;
  reg [7:0] total = 8'd0;
  always @(posedge clk) total <= clear ? 8'd0 : total + step;
  not (even, total[0]);
endmodule
`;

/** A shift register of 16 flip-flops that nothing sets, seen from its last two stages. */
export const chain = [
  'INPUT(d)',
  'OUTPUT(q14)',
  'OUTPUT(q15)',
  ...Array.from({ length: 16 }, (_, i) => `q${i} = DFF(${i === 0 ? 'd' : `q${i - 1}`})`),
  '',
].join('\n');

/** Flip-flops with reset, a latch, and a loop of two gates, in a hierarchy. */
export const mixed = `
module flop (clk, rst, d, q);
  input clk, rst, d;
  output q;
  reg q;
  always @(posedge clk or posedge rst)
    if (rst) q <= 1'b0;
    else q <= d;
endmodule

module mixed (clk, rst, d, en, sn, rn, q, held, flag);
  input clk, rst, en, sn, rn;
  input [1:0] d;
  output [1:0] q;
  output held, flag;
  reg held;
  wire back, either, both;
  or (either, d[0], d[1]);
  and (both, either, en);
  flop f0 (clk, rst, both, q[0]);
  flop f1 (clk, rst, either, q[1]);
  always @(en or d) if (en) held = d[0];
  nand (flag, sn, back);
  nand (back, rn, flag);
endmodule
`;
