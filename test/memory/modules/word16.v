// A 16-bit processor with eight registers; program and data share one memory of 32,768 words, which
// is filled from a file. Two cycles an instruction.
//
//   15   12 11   9 8    6 5    3 2    0
//   [ op  ] [ rd ] [ ra ] [ rb ] [ fn ]     fn: add sub and or xor, shift left, right, less than
//   [ op  ] [ rd ] [ ra ] [   imm6    ]     add immediate, load, store
//   [ op  ] [ rd ] [      imm9        ]     constant, upper constant, branches, call
module word16 #(parameter PROGRAM = "word16.hex") (
  input             clk, reset,
  input      [15:0] in_port,
  output reg [15:0] out_port,
  output reg        strobe,
  output     [14:0] pc,
  output            halted
);
  localparam [3:0] ALU = 0, ADDI = 1, LD = 2, ST = 3, LDI = 4, LUI = 5, BZ = 6, BNZ = 7, JAL = 8,
                   JR = 9, IN = 10, OUT = 11, HALT = 15;

  reg [15:0] memory [0:32767];
  reg [15:0] registers [0:7];
  reg [14:0] counter;
  reg [15:0] ir;
  reg        execute;
  integer    n;

  initial begin
    $readmemh(PROGRAM, memory);
    for (n = 0; n < 8; n = n + 1) registers[n] = 0;
    counter = 0;
    execute = 0;
    ir = 0;
    out_port = 0;
    strobe = 0;
  end

  wire [3:0]  op = ir[15:12];
  wire [15:0] d = registers[ir[11:9]], a = registers[ir[8:6]], b = registers[ir[5:3]];
  wire [15:0] imm6 = {{10{ir[5]}}, ir[5:0]}, imm9 = {{7{ir[8]}}, ir[8:0]};
  wire [15:0] target = {1'b0, counter} + imm9;
  wire [15:0] effective = a + imm6;
  wire [14:0] address = execute ? effective[14:0] : counter;
  wire [15:0] word = memory[address];

  function [15:0] alu(input [2:0] fn, input [15:0] p, q);
    case (fn)
      0: alu = p + q;
      1: alu = p - q;
      2: alu = p & q;
      3: alu = p | q;
      4: alu = p ^ q;
      5: alu = p << q[3:0];
      6: alu = p >> q[3:0];
      7: alu = p < q;
    endcase
  endfunction

  assign pc = counter;
  assign halted = execute && op == HALT;

  always @(posedge clk) begin
    strobe <= 0;
    if (reset) begin
      counter <= 0;
      execute <= 0;
    end else if (!execute) begin
      ir <= word;
      counter <= counter + 1;
      execute <= 1;
    end else if (op != HALT) begin
      execute <= 0;
      case (op)
        ALU: registers[ir[11:9]] <= alu(ir[2:0], a, b);
        ADDI: registers[ir[11:9]] <= effective;
        LD: registers[ir[11:9]] <= word;
        ST: memory[address] <= d;
        LDI: registers[ir[11:9]] <= imm9;
        LUI: registers[ir[11:9]] <= {ir[8:0], 7'd0} | d[6:0];
        BZ: if (d == 0) counter <= target[14:0];
        BNZ: if (d != 0) counter <= target[14:0];
        JAL: begin
          registers[ir[11:9]] <= {1'b0, counter};
          counter <= target[14:0];
        end
        JR: counter <= d[14:0];
        IN: registers[ir[11:9]] <= in_port;
        OUT: begin
          out_port <= d;
          strobe <= 1;
        end
      endcase
    end
  end
endmodule
