// A 16-bit processor: eight registers, carry, 32 words of data memory, program memory outside.
//
//   15   12 11   9 8    6 5    3 2    0
//   [ op  ] [ rd ] [ ra ] [ rb ] [ fn ]     registers
//   [ op  ] [ rd ] [ ra ] [   imm6    ]     immediate, loads and stores
//   [ op  ] [ rd ] [      imm9        ]     constants, branches, calls
//
// Two cycles an instruction, three for a load. Register 0 is an ordinary one.
module processor (
  input             clk, rst_n,
  output     [7:0]  pc,
  input      [15:0] instruction,
  input      [15:0] in_port,
  output reg [15:0] out_port,
  output reg        out_strobe,
  output            halted,
  output            retired,
  // For looking inside.
  input      [4:0]  probe,
  output     [15:0] probe_register, probe_memory,
  output            probe_carry
);
  `define OP  ir[15:12]
  `define RD  ir[11:9]
  `define RA  ir[8:6]
  `define RB  ir[5:3]
  `define FN  ir[2:0]

  localparam [3:0] ALU = 0, UNARY = 1, ADDI = 2, ANDI = 3, ORI = 4, LDI = 5, LDIH = 6, LD = 7,
                   ST = 8, BZ = 9, BNZ = 10, BN = 11, BP = 12, JAL = 13, JR = 14, SYS = 15;
  localparam [1:0] FETCH = 2'd0, EXECUTE = 2'd1, LOAD = 2'd2, HALT = 2'd3;

  reg [1:0]  state;
  reg [7:0]  counter;
  reg [15:0] ir;
  reg        carry;
  reg [15:0] registers [0:7];
  reg [15:0] memory [0:31];
  reg [4:0]  address;

  integer n;
  initial begin
    for (n = 0; n < 8; n = n + 1) registers[n] = 16'h0000;
    for (n = 0; n < 32; n = n + 1) memory[n] = {n[7:0], ~n[7:0]};
  end

  wire [15:0] d = registers[`RD], a = registers[`RA], b = registers[`RB];
  wire signed [15:0] imm6 = {{10{ir[5]}}, ir[5:0]};
  wire signed [15:0] imm9 = {{7{ir[8]}}, ir[8:0]};

  function [3:0] population(input [15:0] v);
    integer k;
    begin
      population = 0;
      // Sixteen ones do not fit; they count as fifteen.
      for (k = 0; k < 16; k = k + 1)
        if (v[k] && population != 4'hf) population = population + 1;
    end
  endfunction

  function [15:0] rotated(input [15:0] v, input [3:0] by);
    reg [31:0] twice;
    begin
      twice = {v, v} << by;
      rotated = twice[31:16];
    end
  endfunction

  // What goes into register rd and into the carry, and whether it does.
  reg [15:0] result;
  reg        writes, carry_next;

  always @* begin : execute
    result = 16'hxxxx;
    writes = 1'b1;
    carry_next = carry;
    case (`OP)
      ALU:
        case (`FN)
          3'd0: {carry_next, result} = a + b;
          3'd1: {carry_next, result} = a - b;
          3'd2: result = a & b;
          3'd3: result = a | b;
          3'd4: result = a ^ b;
          3'd5: result = $signed(a) < $signed(b);
          3'd6: result = a < b;
          3'd7: result = a[7:0] * b[7:0];
        endcase
      UNARY:
        case (`FN)
          3'd0: result = a << b[3:0];
          3'd1: result = a >> b[3:0];
          3'd2: result = $signed(a) >>> b[3:0];
          3'd3: result = rotated(a, b[3:0]);
          3'd4: result = ~a;
          3'd5: result = -a;
          3'd6: result = population(a);
          3'd7: result = {a[7:0], a[15:8]};
        endcase
      ADDI: {carry_next, result} = {1'b0, a} + {1'b0, imm6};
      ANDI: result = a & ir[5:0];
      ORI:  result = a | ir[5:0];
      LDI:  result = imm9;
      LDIH: result = {ir[7:0], d[7:0]};
      JAL:  result = counter;
      SYS:
        case (`FN)
          3'd2: result = in_port;
          3'd3: {carry_next, result} = a + b + carry;
          3'd4: {carry_next, result} = a - b - carry;
          3'd5: result = ($signed(a) < $signed(b)) ? a : b;
          3'd6: result = carry;
          3'd7: result = ($signed(a) < $signed(b)) ? b : a;
          default: writes = 1'b0;
        endcase
      default: writes = 1'b0;
    endcase
  end

  wire taken = `OP == BZ  && d == 0 || `OP == BNZ && d != 0
            || `OP == BN  && d[15]  || `OP == BP  && !d[15] && |d
            || `OP == JAL;

  always @(posedge clk or negedge rst_n)
    if (!rst_n) begin
      state <= FETCH;
      counter <= 8'd0;
      ir <= 16'd0;
      out_port <= 16'd0;
      out_strobe <= 1'b0;
      carry <= 1'b0;
      address <= 5'd0;
    end
    else begin
      out_strobe <= 1'b0;
      case (state)
        FETCH: begin
          ir <= instruction;
          counter <= counter + 1'b1;
          state <= EXECUTE;
        end
        EXECUTE: begin
          state <= FETCH;
          if (writes) carry <= carry_next;
          if (taken) counter <= counter + imm9;
          else if (`OP == JR) counter <= a[7:0] + imm6;
          if (`OP == LD) begin
            address <= a[4:0] + ir[4:0];
            state <= LOAD;
          end
          if (`OP == SYS)
            case (`FN)
              3'd0: state <= HALT;
              3'd1: begin
                out_port <= a;
                out_strobe <= 1'b1;
              end
            endcase
        end
        LOAD: state <= FETCH;
      endcase
    end

  // Memories have no reset.
  always @(posedge clk)
    if (rst_n) begin
      if (state == EXECUTE && writes) registers[`RD] <= result;
      else if (state == LOAD) registers[`RD] <= memory[address];
      if (state == EXECUTE && `OP == ST) memory[a[4:0] + ir[4:0]] <= d;
    end

  assign pc             = counter,
         halted         = state == HALT,
         retired        = state == LOAD || state == EXECUTE && `OP != LD,
         probe_register = registers[probe[2:0]],
         probe_memory   = memory[probe],
         probe_carry    = carry;
endmodule
