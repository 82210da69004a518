// Coin acceptor: collects 5, 10 and 20 up to a price, releases, and pays the rest back in fives.
module coin_acceptor #(
  parameter PRICE = 35,
  parameter PATIENCE = 9          // cycles without a coin until the money goes back
) (
  input            clk,
  input            rst,
  input      [1:0] coin,
  input            refund,
  output           accept,
  output reg       vend,
  output reg       five,
  output     [4:0] balance
);
  localparam        FIVES   = PRICE / 5;
  localparam [1:0]  COLLECT = 2'b00, VEND = 2'b01, PAY = 2'b10;

  reg [1:0] state, state_next;
  reg [4:0] money, money_next;
  reg [3:0] idle;

  function [4:0] worth;           // in fives
    input [1:0] c;
    begin
      worth = 0;
      if (c != 0) worth = 1 << (c - 1);
    end
  endfunction

  always @(posedge clk)
    if (rst) {state, money, idle} <= 0;
    else begin
      {state, money} <= {state_next, money_next};
      if (state != COLLECT || coin || money == 0) idle <= 0;
      else idle <= idle + 1'b1;
    end

  always @* begin
    state_next = state;
    money_next = money;
    vend = 1'b0;
    five = 1'b0;
    // There is no state 11: a machine that were in it would stay.
    case (state)
      COLLECT: begin
        money_next = money + worth(coin);
        if (money_next >= FIVES) state_next = VEND;
        else if (money_next != 0 && (refund || idle == PATIENCE)) state_next = PAY;
      end
      VEND: begin
        vend = 1'b1;
        money_next = money - FIVES;
        state_next = money == FIVES ? COLLECT : PAY;
      end
      PAY: begin
        five = 1'b1;
        money_next = money - 5'd1;
        if (money == 1) state_next = COLLECT;
      end
    endcase
  end

  assign accept  = ~|state,
         balance = money;
endmodule
