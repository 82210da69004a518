// Pedestrian crossing, binary coded, in three processes: state, next state, lamps.
module crossing_binary (clk, rst_n, tick, button, car, walk, wait_lamp);
  parameter GREEN = 6;   // shortest green for cars, in ticks
  parameter AMBER = 2;
  parameter CLEAR = 1;   // all red
  parameter WALK  = 4;
  parameter BLINK = 5;

  input        clk, rst_n;
  input        tick;     // one cycle wide
  input        button;
  output [2:0] car;      // red, amber, green
  output       walk;
  output       wait_lamp;

  localparam [2:0] S_GO    = 3'd0,
                   S_STOP  = 3'd1,
                   S_CLEAR = 3'd2,
                   S_WALK  = 3'd3,
                   S_BLINK = 3'd4,
                   S_EMPTY = 3'd5,
                   S_READY = 3'd6;

  reg [2:0] state, next;
  reg [3:0] timer;
  reg       request;
  reg [2:0] car;
  reg       walk;

  wire done = timer == 0;

  // State and timer.
  always @(posedge clk or negedge rst_n)
    if (!rst_n) begin
      state   <= S_GO;
      timer   <= GREEN - 1;
      request <= 1'b0;
    end else begin
      state <= next;
      if (next != state)
        case (next)
          S_GO:             timer <= GREEN - 1;
          S_STOP, S_READY:  timer <= AMBER - 1;
          S_CLEAR, S_EMPTY: timer <= CLEAR - 1;
          S_WALK:           timer <= WALK - 1;
          S_BLINK:          timer <= BLINK - 1;
        endcase
      else if (tick && !done)
        timer <= timer - 1;
      if (next == S_WALK)
        request <= 1'b0;
      else if (button)
        request <= 1'b1;
    end

  // Next state.
  always @(state or tick or done or request) begin
    next = state;
    if (tick && done)
      case (state)
        S_GO:    if (request) next = S_STOP;
        S_STOP:  next = S_CLEAR;
        S_CLEAR: next = S_WALK;
        S_WALK:  next = S_BLINK;
        S_BLINK: next = S_EMPTY;
        S_EMPTY: next = S_READY;
        default: next = S_GO;
      endcase
  end

  // Lamps.
  always @(state or timer) begin
    car  = 3'b100;
    walk = 1'b0;
    case (state)
      S_GO:    car = 3'b001;
      S_STOP:  car = 3'b010;
      S_READY: car = 3'b110;
      S_WALK:  walk = 1'b1;
      S_BLINK: walk = timer[0];
      default: ;
    endcase
  end

  assign wait_lamp = request;
endmodule
