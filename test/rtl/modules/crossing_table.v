// Pedestrian crossing as a table: one process, casex over state and conditions, tasks and functions.
module crossing_table #(
  parameter integer GREEN = 6, AMBER = 2, CLEAR = 1, WALK = 4, BLINK = 5
) (
  input            clk, rst_n, tick, button,
  output     [2:0] car,
  output           walk,
  output reg       wait_lamp
);
  reg [2:0] phase;
  reg [3:0] count;

  function [3:0] ticks(input [2:0] p);
    casez (p)
      3'b000:         ticks = GREEN;
      3'b001, 3'b110: ticks = AMBER;
      3'b?10, 3'b101: ticks = CLEAR;
      3'b011:         ticks = WALK;
      default:        ticks = BLINK;
    endcase
  endfunction

  // Red, amber, green, walk.
  function [3:0] lamps(input [2:0] p, input odd);
    case (p)
      0: lamps = 4'b0010;
      1: lamps = 4'b0100;
      3: lamps = 4'b1001;
      4: lamps = {3'b100, odd};
      6: lamps = 4'b1100;
      default: lamps = 4'b1000;
    endcase
  endfunction

  task go(input [2:0] p);
    begin
      phase <= p;
      count <= ticks(p) - 1'b1;
    end
  endtask

  wire last = ~|count;

  always @(posedge clk or negedge rst_n) begin
    if (!rst_n) begin
      go(0);
      wait_lamp <= 1'b0;
    end
    else begin
      if (tick && !last) count <= count - 1;
      if (button) wait_lamp <= 1'b1;
      casex ({phase, tick, last, wait_lamp})
        6'bxxx_0_x_x: ;
        6'bxxx_1_0_x: ;
        6'b000_1_1_0: ;
        6'b110_1_1_x: go(0);
        default:      go(phase + 1);
      endcase
      // Whoever walks, or is about to, need not wait.
      if (phase == 3 && !(tick && last) || phase == 2 && tick && last) wait_lamp <= 1'b0;
    end
  end

  assign {car, walk} = lamps(phase, count[0]);
endmodule
