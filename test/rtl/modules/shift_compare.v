// Shifters and comparators, each written in two ways where there are two.
module shift_compare #(parameter W = 8, S = 3) (
  input  [W-1:0] x, y,
  input  [S-1:0] by,
  input  [1:0]   kind,            // left, right, arithmetic right, rotate left
  output reg [W-1:0] shifted,
  output     [W-1:0] staged,
  output         lt, le, eq, slt, sge,
  output     [W-1:0] least, greatest, distance,
  output reg [S:0] leading_zeros,
  output reg [W-1:0] clamped
);
  always @(x or by or kind)
    case (kind)
      2'b00: shifted = x << by;
      2'b01: shifted = x >> by;
      2'b10: shifted = $signed(x) >>> by;
      2'b11: shifted = {x, x} >> (W - by);
    endcase

  // By stages of 1, 2, 4 … places.
  genvar s;
  generate
    for (s = 0; s < S; s = s + 1) begin : stage
      localparam D = 1 << s;
      wire [W-1:0] from;
      reg  [W-1:0] to;
      if (s == 0) begin : first
        assign from = x;
      end
      else begin : later
        assign from = stage[s - 1].to;
      end
      always @* begin
        to = from;
        if (by[s]) begin
          if (!kind[1]) to = {W{1'b0}};
          casez (kind)
            2'b00: to[W-1:D] = from[W-1-D:0];
            2'b11: to = {from[W-1-D:0], from[W-1:W-D]};
            2'b?1: to[W-1-D:0] = from[W-1:D];
            default: to = {{D{from[W-1]}}, from[W-1:D]};
          endcase
        end
      end
    end
  endgenerate
  assign staged = stage[S - 1].to;

  wire signed [W-1:0] sx = x, sy = y;
  assign lt  = x < y,
         le  = x <= y,
         eq  = !(x ^ y),
         slt = sx < sy,
         sge = sx >= sy;

  assign least    = slt ? sx : sy;
  assign greatest = slt ? sy : sx;
  // Between signed values, which may need the whole unsigned range.
  assign distance = slt ? sy - sx : sx - sy;

  integer i;
  always @* begin : count
    leading_zeros = 0;
    for (i = W - 1; i >= 0; i = i - 1) begin
      if (x[i]) disable count;
      leading_zeros = leading_zeros + 1'b1;
    end
  end

  // To -100 … 100.
  always @* begin
    clamped = x;
    if (sx > 100) clamped = 8'd100;
    else if (sx < -100) clamped = -8'd100;
  end
endmodule
