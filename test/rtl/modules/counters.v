module gray_counter #(parameter W = 4) (
  input              clk, rst, enable, down,
  output reg [W-1:0] gray,
  output     [W-1:0] binary
);
  function [W-1:0] to_gray(input [W-1:0] b);
    to_gray = b ^ (b >> 1);
  endfunction

  function [W-1:0] to_binary(input [W-1:0] g);
    integer i;
    for (i = W - 1; i >= 0; i = i - 1)
      to_binary[i] = i == W - 1 ? g[i] : to_binary[i + 1] ^ g[i];
  endfunction

  assign binary = to_binary(gray);

  always @(posedge clk or posedge rst)
    if (rst) gray <= to_gray(0);
    else if (enable) gray <= to_gray(down ? binary - 1 : binary + 1);
endmodule

// Twisted ring; heals itself when it has got into a state outside of its cycle.
module johnson_counter #(parameter N = 5) (
  input              clk, rst, enable,
  output reg [N-1:0] q
);
  integer i;
  reg     valid;

  // In the cycle there is at most one place where neighbours differ.
  always @(q) begin : check
    reg edges;
    valid = 1'b1;
    edges = 1'b0;
    for (i = 1; i < N; i = i + 1)
      if (q[i] != q[i - 1]) begin
        if (edges) valid = 1'b0;
        edges = 1'b1;
      end
  end

  always @(posedge clk)
    if (rst || !valid) q <= 0;
    else if (enable) q <= {q[N-2:0], ~q[N-1]};
endmodule

// Linear feedback shift register, several steps a cycle. TAPS has a 1 for each stage fed back.
module lfsr #(parameter W = 8, TAPS = 8'b1011_1000, GALOIS = 0) (
  input              clk, rst_n,
  input      [1:0]   steps,
  input              load,
  input      [W-1:0] seed,
  output reg [W-1:0] q
);
  function [W-1:0] stepped(input [W-1:0] v);
    if (GALOIS) stepped = (v >> 1) ^ (v[0] ? TAPS : 0);
    else stepped = {v[W-2:0], ^(v & TAPS)};
  endfunction

  task advance(input [1:0] count);
    reg [2:0] k;
    begin
      for (k = 0; k < 3; k = k + 1)
        if (k < count) q = stepped(q);
    end
  endtask

  always @(posedge clk or negedge rst_n)
    if (!rst_n) q = 1;
    else if (load) q = seed;
    else advance(steps);
endmodule

// Two decimal digits that count by 0 … 3.
module decimal_counter (
  input            clk, rst,
  input      [1:0] by,
  output reg [3:0] tens, ones,
  output reg       carry
);
  task add_digit;
    inout  [3:0] digit;
    input  [1:0] amount;
    output       over;
    reg    [4:0] sum;
    begin
      sum = digit + amount;
      over = sum > 9;
      if (over) sum = sum - 10;
      digit = sum;
    end
  endtask

  reg over;
  always @(posedge clk)
    if (rst) begin
      tens = 0;
      ones = 0;
      carry <= 0;
    end
    else begin
      add_digit(ones, by, over);
      add_digit(tens, {1'b0, over}, over);
      carry <= over;
    end
endmodule

module barrel_rotator #(parameter W = 11) (
  input      [W-1:0] d,
  input      [3:0]   by,          // to the left; W and more rotate by 0
  output reg [W-1:0] q,
  output     [W-1:0] reversed
);
  integer i;
  always @* begin
    q = d;
    if (by < W)
      for (i = 0; i < W; i = i + 1)
        q[i] = d[(i + W - by) % W];
  end

  genvar g;
  for (g = 0; g < W; g = g + 1) begin : mirror
    assign reversed[W - 1 - g] = d[g];
  end
endmodule

module counters (
  input         clk, rst, enable, down, load,
  input  [1:0]  steps,
  input  [7:0]  seed,
  input  [10:0] d,
  input  [3:0]  by,
  output [3:0]  gray, binary,
  output [4:0]  johnson,
  output [7:0]  fibonacci,
  output [4:0]  galois,
  output [3:0]  tens, ones,
  output        carry,
  output [10:0] rotated, reversed
);
  gray_counter gc (clk, rst, enable, down, gray, binary);
  johnson_counter jc (.clk(clk), .rst(rst), .enable(enable), .q(johnson));
  lfsr fib (clk, ~rst, steps, load, seed, fibonacci);
  lfsr #(.W(5), .TAPS(5'b10100), .GALOIS(1)) gal
    (.clk(clk), .rst_n(!rst), .steps(steps), .load(load), .seed(seed[4:0]), .q(galois));
  decimal_counter dc (clk, rst, steps, tens, ones, carry);
  barrel_rotator br (d, by, rotated, reversed);
endmodule
