// First-in first-out memory with one clock; DEPTH need not be a power of two.
module fifo #(
  parameter WIDTH = 8,
  parameter DEPTH = 8,
  parameter ALMOST = DEPTH - 2,   // fill from which almost_full is 1
  parameter FALL_THROUGH = 0      // 1: the oldest word is on dout before it is asked for
) (
  input                  clk, rst_n,
  input                  write, read,
  input      [WIDTH-1:0] din,
  output     [WIDTH-1:0] dout,
  output                 empty, full, almost_full,
  output reg             overflow, underflow,
  output     [clog2(DEPTH+1)-1:0] fill
);
  function integer clog2(input integer n);
    integer rest;
    begin
      clog2 = 0;
      for (rest = n - 1; rest > 0; rest = rest >> 1) clog2 = clog2 + 1;
    end
  endfunction

  localparam AW = clog2(DEPTH), CW = clog2(DEPTH + 1);

  reg [WIDTH-1:0] mem [0:DEPTH-1];
  reg [AW-1:0]    head, tail;
  reg [CW-1:0]    used;

  wire do_write = write & ~full;
  wire do_read  = read & ~empty;

  function [AW-1:0] after(input [AW-1:0] p);
    after = p == DEPTH - 1 ? {AW{1'b0}} : p + 1'b1;
  endfunction

  always @(posedge clk)
    if (do_write) mem[head] <= din;

  always @(posedge clk or negedge rst_n)
    if (!rst_n) begin
      head <= 0;
      tail <= 0;
      used <= 0;
      {overflow, underflow} <= 2'b00;
    end
    else begin
      if (do_write) head <= after(head);
      if (do_read)  tail <= after(tail);
      case ({do_write, do_read})
        2'b10: used <= used + 1;
        2'b01: used <= used - 1;
      endcase
      if (write & full) overflow <= 1'b1;
      if (read & empty) underflow <= 1'b1;
    end

  generate
    if (FALL_THROUGH) begin : ahead
      assign dout = mem[tail];
    end else begin : registered
      reg [WIDTH-1:0] out;
      always @(posedge clk) if (do_read) out <= mem[tail];
      assign dout = out;
    end
  endgenerate

  assign empty       = used == 0,
         full        = used == DEPTH,
         almost_full = used >= ALMOST,
         fill        = used;
endmodule
