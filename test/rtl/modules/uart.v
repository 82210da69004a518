// Serial transmitter, 8 data bits, no parity, 1 stop bit, least significant bit first.
module uart_tx #(parameter DIVIDER = 8) (
  input        clk, rst_n,
  input  [7:0] data,
  input        valid,
  output       ready,
  output       txd
);
  reg [8:0]  shifter;             // what follows the bit on the line
  reg [3:0]  bits;                // bits left on the line, 0 if idle
  reg        line;
  reg [15:0] clocks;

  wire bit_end = clocks == DIVIDER - 1;

  assign ready = bits == 4'd0 || bits == 4'd1 && bit_end;
  assign txd   = line;

  always @(posedge clk or negedge rst_n)
    if (!rst_n) begin
      line    <= 1'b1;
      bits    <= 4'd0;
      clocks  <= 16'd0;
      shifter <= ~9'd0;
    end else if (ready) begin
      clocks <= 0;
      bits   <= valid ? 4'd10 : 4'd0;
      line   <= !valid;
      if (valid) shifter <= {1'b1, data};
    end else begin
      clocks <= bit_end ? 16'd0 : clocks + 16'd1;
      if (bit_end) begin
        {shifter, line} <= {1'b1, shifter};
        bits <= bits - 1;
      end
    end
endmodule

// Serial receiver: two synchronizing registers, then samples in the middle of each bit.
module uart_rx #(parameter DIVIDER = 8) (
  input            clk, rst_n,
  input            rxd,
  output reg [7:0] data,
  output reg       strobe,
  output reg       frame_error
);
  localparam [1:0] IDLE = 0, START = 1, DATA = 2, STOP = 3;

  reg [1:0]  sync;
  reg [1:0]  state;
  reg [2:0]  count;
  reg [15:0] clocks;

  wire rx     = sync[1];
  wire middle = clocks == 0;

  always @(posedge clk or negedge rst_n)
    if (!rst_n) sync <= 2'b11;
    else        sync <= {sync[0], rxd};

  always @(posedge clk or negedge rst_n) begin : receiver
    if (!rst_n) begin
      state       <= IDLE;
      strobe      <= 1'b0;
      frame_error <= 1'b0;
      data        <= 8'h00;
      count       <= 0;
      clocks      <= 0;
    end
    else begin
      strobe      <= 1'b0;
      frame_error <= 1'b0;
      clocks      <= clocks - 1;
      case (state)
        IDLE:
          if (!rx) begin
            state  <= START;
            clocks <= DIVIDER / 2 - 1;
          end
        START:
          if (middle) begin
            // Too short a pulse is no start bit.
            state  <= rx ? IDLE : DATA;
            clocks <= DIVIDER - 1;
            count  <= 3'd7;
          end
        DATA:
          if (middle) begin
            data   <= {rx, data[7:1]};
            clocks <= DIVIDER - 1;
            if (count == 0) state <= STOP;
            count  <= count - 3'd1;
          end
        STOP:
          if (middle) begin
            strobe      <= rx;
            frame_error <= ~rx;
            state       <= IDLE;
          end
      endcase
    end
  end
endmodule

// A transmitter that talks to a receiver.
module uart_link #(parameter DIVIDER = 4) (
  input        clk, rst_n,
  input  [7:0] data,
  input        valid,
  output       ready, line,
  output [7:0] received,
  output       strobe, frame_error
);
  uart_tx #(.DIVIDER(DIVIDER)) tx (.txd(line), .clk(clk), .rst_n(rst_n), .data(data),
                                   .valid(valid), .ready(ready));
  uart_rx #(DIVIDER) rx (clk, rst_n, line, received, strobe, frame_error);
endmodule
