// A memory of 32-bit words with a write enable for each byte, read in the same cycle and, through a
// register, in the next one.
module byte_ram #(parameter WORDS = 48) (
  input             clk,
  input      [3:0]  enable,
  input      [5:0]  address,
  input      [31:0] data,
  output     [31:0] now,
  output reg [31:0] next
);
  reg [31:0] words [0:WORDS-1];
  integer i;
  always @(posedge clk) begin
    for (i = 0; i < 4; i = i + 1)
      if (enable[i]) words[address][8*i +: 8] <= data[8*i +: 8];
    next <= words[address];
  end
  assign now = words[address];
endmodule
