// A datapath put together by parameters, defparam, generate and arrays of instances.
module hierarchy #(parameter LANES = 4, W = 6) (
  input                clk, rst_n,
  input  [LANES*W-1:0] x,
  input  [W-1:0]       c,
  input                mode,
  output [LANES*W-1:0] lanes,
  output [W+1:0]       total,
  output [W-1:0]       largest,
  output [LANES-1:0]   odd, masked,
  output [7:0]         config_word,
  output [W-1:0]       delayed
);
  wire [LANES*W-1:0] y;

  // Each lane is of another kind.
  genvar i;
  generate
    for (i = 0; i < LANES; i = i + 1) begin : lane
      wire [W-1:0] in = x[i*W +: W];
      unit #(.KIND(i % 3), .W(W)) u (.clk(clk), .rst_n(rst_n), .a(in), .b(c), .y(y[(i+1)*W-1 -: W]));
      defparam u.BIAS = 2 * i + 1;
    end
  endgenerate
  // The last one in the text wins.
  defparam lane[2].u.BIAS = 13;
  assign lanes = y;

  tree #(.N(LANES), .W(W)) sum (y, total);

  // Largest of all lanes by a function that calls another.
  function [W-1:0] larger(input [W-1:0] p, q);
    larger = p > q ? p : q;
  endfunction
  function [W-1:0] largest_of(input [LANES*W-1:0] all);
    integer k;
    begin
      largest_of = all[W-1:0];
      for (k = 1; k < LANES; k = k + 1) largest_of = larger(largest_of, all[k*W +: W]);
    end
  endfunction
  assign largest = largest_of(y);

  // An array of instances: the vector is spread over them, the scalar goes to all.
  wire [LANES-1:0] lowest = {y[3*W], y[2*W], y[W], y[0]};
  mask_bit masks [LANES-1:0] (.a(lowest), .on(mode), .y(masked));
  xor parity [LANES-1:0] (odd, lowest, masked, mode);

  // Parameters that go down two levels, and ones that follow from others.
  settings s (config_word);
  defparam s.inner.LOW = 4'd9, s.HIGH = 3;

  delay #(.DEPTH(3), .W(W)) d (.clk(clk), .q(delayed), .d(lane[1].in ^ lane[0].u.y));
endmodule

module unit (clk, rst_n, a, b, y);
  parameter KIND = 0;
  parameter W = 8;
  parameter [W-1:0] BIAS = 1;
  input clk, rst_n;
  input [W-1:0] a, b;
  output [W-1:0] y;

  generate
    case (KIND)
      0: begin : adds
        assign y = a + b + BIAS;
      end
      1: begin : stores
        reg [W-1:0] r;
        always @(posedge clk or negedge rst_n) r <= !rst_n ? BIAS : a ^ b;
        assign y = r;
      end
      default: begin : counts
        reg [W-1:0] r;
        always @(posedge clk or negedge rst_n)
          if (!rst_n) r <= 0;
          else r <= r + (a > b ? BIAS : 0);
        assign y = r;
      end
    endcase
  endgenerate
endmodule

// A tree of adders that contains itself.
module tree #(parameter N = 4, W = 8) (input [N*W-1:0] x, output [W+1:0] y);
  generate
    if (N == 1) assign y = x;
    else begin : halves
      localparam L = N / 2;
      wire [W+1:0] low, high;
      tree #(L, W) a (x[L*W-1:0], low);
      tree #(N - L, W) b (.x(x[N*W-1:L*W]), .y(high));
      assign y = low + high;
    end
  endgenerate
endmodule

module mask_bit (input a, on, output y);
  assign y = on & a;
endmodule

module settings #(parameter HIGH = 1, parameter MIDDLE = HIGH * 2 + 1) (output [7:0] word);
  field inner (word[3:0]);
  field #(HIGH + MIDDLE) outer (word[7:4]);
endmodule

module field #(parameter [3:0] LOW = 15) (output [3:0] value);
  assign value = LOW;
endmodule

module delay #(parameter DEPTH = 2, W = 1) (input clk, input [W-1:0] d, output [W-1:0] q);
  reg [W-1:0] line [1:DEPTH];
  integer i;
  always @(posedge clk) begin
    line[1] <= d;
    for (i = 2; i <= DEPTH; i = i + 1) line[i] <= line[i - 1];
  end
  assign q = line[DEPTH];
endmodule
