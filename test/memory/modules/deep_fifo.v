// A first-in first-out memory of 1,000 words of 18 bits; the oldest word shows without being asked.
module deep_fifo (
  input             clk, reset, push, pop,
  input      [17:0] data,
  output     [17:0] oldest,
  output     [9:0]  count,
  output            full, empty
);
  localparam DEPTH = 1000;
  reg [17:0] words [0:DEPTH-1];
  reg [9:0]  first, last, used;
  assign count = used;
  assign full = used == DEPTH;
  assign empty = used == 0;
  assign oldest = empty ? 18'd0 : words[first];
  wire takes = push && !full, gives = pop && !empty;
  always @(posedge clk or posedge reset)
    if (reset) begin
      first <= 0;
      last <= 0;
      used <= 0;
    end else begin
      if (takes) begin
        words[last] <= data;
        last <= last == DEPTH - 1 ? 0 : last + 1;
      end
      if (gives) first <= first == DEPTH - 1 ? 0 : first + 1;
      used <= used + takes - gives;
    end
endmodule
