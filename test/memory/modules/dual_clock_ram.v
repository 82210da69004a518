// A memory written on one clock and read through a register on another one.
module dual_clock_ram #(parameter WIDTH = 12, ADDRESS = 6) (
  input                    write_clk, read_clk, write,
  input      [ADDRESS-1:0] write_address, read_address,
  input      [WIDTH-1:0]   write_data,
  output reg [WIDTH-1:0]   read_data
);
  reg [WIDTH-1:0] words [0:2**ADDRESS-1];
  always @(posedge write_clk) if (write) words[write_address] <= write_data;
  always @(posedge read_clk) read_data <= words[read_address];
endmodule
