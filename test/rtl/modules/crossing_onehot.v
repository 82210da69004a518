// Pedestrian crossing, one-hot coded, in two processes.
module crossing_onehot #(
  parameter GREEN = 6, AMBER = 2, CLEAR = 1, WALK = 4, BLINK = 5
) (
  input  wire       clk, rst_n, tick, button,
  output wire [2:0] car,
  output wire       walk, wait_lamp
);
  localparam GO = 0, STOP = 1, HALT = 2, CROSS = 3, HURRY = 4, EMPTY = 5, READY = 6;

  reg [6:0] at, to;
  reg [3:0] left, load;
  reg       asked;

  always @(posedge clk, negedge rst_n)
    if (~rst_n) begin
      at     <= 7'b0;
      at[GO] <= 1'b1;
      left   <= GREEN - 1;
      asked  <= 0;
    end
    else begin
      at    <= to;
      left  <= load;
      asked <= (asked | button) & ~to[CROSS];
    end

  always @* begin
    to   = 7'b0;
    load = left;
    if (tick && left != 0) load = left - 4'd1;
    case (1'b1)
      at[GO]:
        if (tick && left == 0 && asked) begin to[STOP] = 1'b1; load = AMBER - 1; end
        else to[GO] = 1'b1;
      at[STOP]:
        if (tick & ~|left) begin to[HALT] = 1'b1; load = CLEAR - 1; end
        else to[STOP] = 1'b1;
      at[HALT]:
        if (tick & ~|left) begin to[CROSS] = 1'b1; load = WALK - 1; end
        else to[HALT] = 1'b1;
      at[CROSS]:
        if (tick & ~|left) begin to[HURRY] = 1'b1; load = BLINK - 1; end
        else to[CROSS] = 1'b1;
      at[HURRY]:
        if (tick & ~|left) begin to[EMPTY] = 1'b1; load = CLEAR - 1; end
        else to[HURRY] = 1'b1;
      at[EMPTY]:
        if (tick & ~|left) begin to[READY] = 1'b1; load = AMBER - 1; end
        else to[EMPTY] = 1'b1;
      at[READY]:
        if (tick & ~|left) begin to[GO] = 1'b1; load = GREEN - 1; end
        else to[READY] = 1'b1;
    endcase
  end

  assign car       = {~(at[GO] | at[STOP]), at[STOP] | at[READY], at[GO]},
         walk      = at[CROSS] | (at[HURRY] & left[0]),
         wait_lamp = asked;
endmodule
