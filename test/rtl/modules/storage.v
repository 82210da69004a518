// Forms of storage: latches, edges, asynchronous controls, gated and divided clocks.
module storage (
  input            clk, rst, set_n, enable, hold,
  input      [3:0] d,
  input      [1:0] sel,
  output reg [3:0] transparent,   // latch, open while enable is 1
  output reg [3:0] clearable,     // latch with clear and preset
  output     [3:0] master_slave,  // two latches of opposite level
  output reg [3:0] reset_first, set_first,
  output reg [3:0] both_controls, // of which some bits are set, others reset
  output reg [3:0] plain,         // no control: an unreset register beside a reset one
  output reg [3:0] falling,
  output     [3:0] gated, pulsed,
  output reg [1:0] divided,
  output     [2:0] ripple,
  output     [3:0] file_word,
  output           nor_q
);
  always @(enable or d)
    if (enable) transparent = d;

  always @*
    if (rst) clearable <= 4'b0000;
    else if (!set_n) clearable <= 4'b1111;
    else if (enable & ~hold) clearable <= d + 4'd1;

  reg [3:0] master, slave;
  always @(clk or d) if (~clk) master <= d;
  always @(clk or master) if (clk) slave <= master;
  assign master_slave = slave;

  always @(posedge clk or posedge rst or negedge set_n)
    if (rst) reset_first <= 4'b0000;
    else if (!set_n) reset_first <= 4'b1111;
    else if (!hold) reset_first <= d;

  always @(posedge clk or posedge rst or negedge set_n)
    if (set_n == 1'b0) set_first <= {4{1'b1}};
    else if (rst == 1'b1) set_first <= {4{1'b0}};
    else set_first <= hold ? set_first : d;

  always @(negedge set_n, posedge rst, posedge clk)
    case ({rst, set_n})
      2'b00, 2'b10, 2'b11: both_controls <= rst ? 4'b0101 : 4'b0110;
      default: if (!hold) both_controls <= both_controls ^ d;
    endcase

  always @(posedge clk or posedge rst)
    if (rst) falling[3:2] <= 2'b11;
    else begin
      plain <= d;
      falling[3:2] <= d[3:2];
    end
  always @(negedge clk)
    falling[1:0] <= plain[1:0];

  // Clock gate with its latch, and a second one whose latch comes with the register.
  reg open;
  wire gated_clock = clk & open;
  reg [3:0] by_gate;
  always @(clk or enable) if (!clk) open = enable;
  always @(posedge gated_clock or posedge rst)
    if (rst) by_gate <= 4'd0;
    else by_gate <= by_gate + d;
  assign gated = by_gate;

  wire stopped = clk | hold_low;
  reg hold_low;
  always @* if (clk) hold_low = hold;
  reg [3:0] by_pulse;
  always @(negedge stopped) by_pulse <= d ^ by_gate;
  assign pulsed = by_pulse;

  // A divided clock, and what it clocks.
  reg half;
  always @(posedge clk or posedge rst) if (rst) half <= 1'b0; else half <= ~half;
  always @(posedge half) divided <= divided + sel;

  // Ripple counter: an array of instances, each clocked by the one before.
  wire [2:0] stage;
  toggle bits [2:0] (.clk({stage[1:0], ~clk}), .rst(rst), .q(stage));
  assign ripple = stage;

  // Four words of latches.
  reg [3:0] words [0:3];
  always @* if (enable && !rst) words[sel] = ~d;
  assign file_word = words[{sel[0], sel[1]}];

  // Cross-coupled gates.
  wire q, qn;
  assign q = ~(rst | qn), qn = ~((~set_n & ~rst) | q);
  assign nor_q = q;
endmodule

// Toggles on the falling edge.
module toggle (input clk, rst, output reg q);
  always @(negedge clk or posedge rst)
    if (rst) q <= 1'b0;
    else q <= ~q;
endmodule
