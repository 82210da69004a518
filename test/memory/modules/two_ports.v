// A memory macro as a vendor's library models it: two ports, each of which reads or writes at its
// clock edge and shows what was there before. Port b writes after port a.
module two_ports #(parameter WIDTH = 9, DEPTH = 100) (
  input                          clk,
  input                          enable_a, write_a, enable_b, write_b,
  input      [$clog2(DEPTH)-1:0] address_a, address_b,
  input      [WIDTH-1:0]         data_a, data_b,
  output reg [WIDTH-1:0]         q_a, q_b
);
  reg [WIDTH-1:0] words [DEPTH-1:0];
  always @(posedge clk)
    if (enable_a) begin
      q_a <= words[address_a];
      if (write_a) words[address_a] <= data_a;
    end
  always @(posedge clk)
    if (enable_b) begin
      q_b <= words[address_b];
      if (write_b) words[address_b] <= data_b;
    end
endmodule
