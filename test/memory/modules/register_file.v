// 32 registers of 32 bits with two read ports; register 0 reads as 0.
module register_file (
  input         clk, write,
  input  [4:0]  rd, ra, rb,
  input  [31:0] data,
  output [31:0] a, b
);
  reg [31:0] registers [0:31];
  integer n;
  initial for (n = 0; n < 32; n = n + 1) registers[n] = 32'h0101_0101 * n;
  always @(posedge clk) if (write && rd != 0) registers[rd] <= data;
  assign a = ra == 0 ? 0 : registers[ra];
  assign b = rb == 0 ? 0 : registers[rb];
endmodule
