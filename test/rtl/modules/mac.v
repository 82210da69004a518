// 8x8 multiplier with a sign choice for each operand, and a saturating accumulator behind it.
module mac (
  input                    clk, rst_n,
  input                    clear, enable, subtract,
  input                    a_signed, b_signed,
  input             [7:0]  a, b,
  output     signed [16:0] product,
  output            [16:0] product_by_rows,
  output reg signed [19:0] sum,
  output reg               saturated
);
  localparam signed [19:0] MOST = 20'sh7ffff, LEAST = -20'sh80000;

  // One more bit makes either kind of operand a signed one.
  wire signed [8:0] wide_a = {a_signed & a[7], a};
  wire signed [8:0] wide_b = $signed({b_signed & b[7], b});
  assign product = wide_a * wide_b;

  // The same by rows: the row of the sign bit counts negatively.
  genvar r;
  generate
    for (r = 0; r < 9; r = r + 1) begin : row
      wire [16:0] addend = {{8{wide_a[8]}}, wide_a} << r;
      wire [16:0] before, after;
      if (r == 0) assign before = 17'd0;
      else assign before = row[r - 1].after;
      if (r < 8) assign after = before + (addend & {17{wide_b[r]}});
      else assign after = wide_b[r] ? before - addend : before;
    end
  endgenerate
  assign product_by_rows = row[8].after;

  wire signed [20:0] exact = subtract ? sum - product : sum + product;

  always @(posedge clk or negedge rst_n)
    if (!rst_n) {saturated, sum} <= 0;
    else if (clear) begin
      sum <= 0;
      saturated <= 1'b0;
    end
    else if (enable) begin
      if (exact > MOST) begin
        sum <= MOST;
        saturated <= 1'b1;
      end
      else if (exact < LEAST) begin
        sum <= LEAST;
        saturated <= 1'b1;
      end
      else sum <= exact;
    end
endmodule
