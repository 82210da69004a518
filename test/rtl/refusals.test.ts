import { describe, expect, it } from 'vitest';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';

/** What is said of a text: severity, code, line and message, in order of lines. */
function saidOf(text: string) {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source('refused.v', text)], {}, diagnostics);
  const said = diagnostics.list.map(({ severity, code, message, span }) => {
    const line = span === undefined ? 0 : span.source.place(span.start).line;
    return { severity, code, line, message };
  });
  return { circuit, said: said.sort((a, b) => a.line - b.line) };
}

/** Numbers of the lines that end in `// here`. */
const markedLines = (text: string): number[] =>
  text.split('\n').flatMap((line, i) => (line.endsWith('// here') ? [i + 1] : []));

/** What is refused: code, a part of the message that shows the way out, and the text. */
const refusals: Readonly<Record<string, readonly [code: string, way: string, text: string]>> = {
  'an always that only waits for time': [
    'not-supported',
    'let an input port be the clock',
    `module m (output reg q);
       always #5 // here
         q = ~q;
     endmodule`,
  ],
  'a wait inside of a process': [
    'not-supported',
    'keep the state in a register and use if',
    `module m (input clk, ready, d, output reg q);
       always @(posedge clk) begin
         wait (ready) // here
           q <= d;
       end
     endmodule`,
  ],
  'two clocks of one process': [
    'not-supported',
    'test every set and reset by an if, and the clock nowhere',
    `module m (input clk_a, clk_b, d, output reg q);
       always @(posedge clk_a or posedge clk_b) // here
         q <= d;
     endmodule`,
  ],
  'both edges of a clock in one process': [
    'not-supported',
    'use an always for each edge',
    `module m (input clk, d, output reg q);
       always @(posedge clk or negedge clk) // here
         q <= d;
     endmodule`,
  ],
  'a register with two processes': [
    'net-multiply-driven',
    'leave one of them',
    `module m (input clk_a, clk_b, d, output reg q);
       always @(posedge clk_a) q <= d;
       always @(posedge clk_b)
         q <= ~d; // here
     endmodule`,
  ],
  'an event list with edges and levels': [
    'not-supported',
    'give every signal posedge or negedge',
    `module m (input clk, rst, d, output reg q);
       always @(posedge clk
                or rst) // here
         if (rst) q <= 1'b0; else q <= d;
     endmodule`,
  ],
  'an asynchronous load of what depends on the register': [
    'not-supported',
    'make it at the clock edge',
    `module m (input clk, load, input [3:0] d, output reg [3:0] q);
       always @(posedge clk or posedge load)
         if (load)
           q <= q + d; // here
         else q <= q + 1;
     endmodule`,
  ],
  'a reset of the other polarity than its edge': [
    'not-supported',
    'test the level that the edge leads to',
    `module m (input clk, rst_n, d, output reg q);
       always @(posedge clk or posedge rst_n)
         if (!rst_n) q <= 1'b0;
         else q <= d; // here
     endmodule`,
  ],
  'a second event control in a process': [
    'not-supported',
    'keep the step in a register',
    `module m (input clk, d, output reg q);
       always @(posedge clk) begin
         q <= d;
         @(posedge clk) // here
           q <= ~d;
       end
     endmodule`,
  ],
  'a wide division by a signal': [
    'not-supported',
    'use at most 128 bits',
    `module m (input [199:0] a, b, output [199:0] q);
       assign q =
         a / b; // here
     endmodule`,
  ],
  'a power of signals': [
    'not-supported',
    'write a multiplication or a table',
    `module m (input [3:0] a, b, output [7:0] q);
       assign q = a ** b; // here
     endmodule`,
  ],
  'a random number': [
    'not-supported',
    'leave it out or use a constant',
    `module m (input clk, output reg [7:0] q);
       always @(posedge clk)
         q <= $random; // here
     endmodule`,
  ],
  'a memory that comes from a file that is not there': [
    'file-unreadable',
    'mend its name',
    `module m (input [1:0] a, output [7:0] q);
       reg [7:0] rom [0:3];
       initial $readmemh("rom.hex", rom); // here
       assign q = rom[a];
     endmodule`,
  ],
  'a large memory without a clock': [
    'not-supported',
    'write it at clock edges',
    `module m (input clk, input we, input [11:0] a, input [31:0] d, output [31:0] q);
       reg [31:0] ram [0:4095];
       always @*
         if (we) ram[a] = d; // here
       assign q = ram[a];
     endmodule`,
  ],
  'a large memory that is reset without a clock': [
    'not-supported',
    'clear it word by word at clock edges',
    `module m (input clk, input rst, input [11:0] a, input [31:0] d, output [31:0] q);
       reg [31:0] ram [0:4095];
       integer i;
       always @(posedge clk or posedge rst)
         if (rst) begin
           for (i = 0; i < 4096; i = i + 1)
             ram[i] <= 0; // here
         end else ram[a] <= d;
       assign q = ram[a];
     endmodule`,
  ],
  'a loop that a signal bounds': [
    'loop-unbounded',
    'give it constant bounds and an `if` inside',
    `module m (input [3:0] n, output reg [7:0] q);
       integer i;
       always @* begin
         q = 0;
         for (i = 0; i < n; i = i + 1) // here
           q = q + i;
       end
     endmodule`,
  ],
  'a loop whose index cannot reach its end': [
    'loop-unbounded',
    'declare it wider, or as an integer',
    `module m (input [7:0] d, output reg [7:0] q);
       reg [2:0] i;
       always @*
         for (i = 0; i < 8; i = i + 1) // here
           q[i] = d[7 - i];
     endmodule`,
  ],
  'a function that calls itself by a signal': [
    'loop-unbounded',
    'must depend on constants alone',
    `module m (input [3:0] a, output [7:0] q);
       function automatic [7:0] factorial(input [3:0] n);
         factorial = n == 0 ? 1 : n * factorial(n - 1); // here
       endfunction
       assign q = factorial(a);
     endmodule`,
  ],
  'a part select with moving ends': [
    'constant-required',
    'use literals and parameters',
    `module m (input [7:0] a, input [2:0] n, output [7:0] q);
       assign q = a[n:0]; // here
     endmodule`,
  ],
  'a case label with x': [
    'not-supported',
    'use casez with ?',
    `module m (input [1:0] a, output reg q);
       always @*
         case (a)
           2'b1x: q = 1; // here
           default: q = 0;
         endcase
     endmodule`,
  ],
  'a force': [
    'not-supported',
    'use an ordinary assignment under a condition',
    `module m (input clk, d, output reg q);
       always @(posedge clk)
         force q = d; // here
     endmodule`,
  ],
  'statements side by side': [
    'not-supported',
    'use begin',
    `module m (input clk, d, output reg q, p);
       always @(posedge clk)
         fork // here
           q <= d;
           p <= ~d;
         join
     endmodule`,
  ],
  'a named event': [
    'not-supported',
    'set a register for one cycle',
    `module m (input clk, d, output reg q);
       event done;
       always @(posedge clk) begin
         q <= d;
         -> done; // here
       end
     endmodule`,
  ],
  'a value that is to be assigned after some edges': [
    'not-supported',
    'keep the value in a register until then',
    `module m (input clk, d, output reg q);
       always @(posedge clk)
         q <= repeat (2) @(posedge clk) d; // here
     endmodule`,
  ],
  'a power-up value that depends on an input': [
    'constant-required',
    'use literals and parameters',
    `module m (input clk, d, output reg q);
       initial q = d; // here
       always @(posedge clk) q <= d;
     endmodule`,
  ],
  'an assign to a variable': [
    'target-invalid',
    'declare it as a wire',
    `module m (input a, output reg q);
       assign q = a; // here
     endmodule`,
  ],
  'a process that assigns a net': [
    'target-invalid',
    'declare it as reg',
    `module m (input a, output q);
       always @*
         q = a; // here
     endmodule`,
  ],
  'an unsized number in a concatenation': [
    'range-invalid',
    "needs a width, such as 1'b0",
    `module m (input [3:0] a, output [7:0] q);
       assign q = {a, 1}; // here
     endmodule`,
  ],
  'a name that is not declared': [
    'name-undeclared',
    'declare it or mend its spelling',
    `module m (input clk, d, output reg q);
       always @(posedge clk)
         q <= d & enable; // here
     endmodule`,
  ],
  'too few arguments': [
    'argument-count',
    'takes 2 arguments, got 1',
    `module m (input a, output q);
       function both(input x, y);
         both = x & y;
       endfunction
       assign q = both(a); // here
     endmodule`,
  ],
};

describe('what no cycle model can run is refused at its place, with a way out:', () => {
  it.each(Object.entries(refusals))('%s', (_, [code, way, text]) => {
    const { circuit, said } = saidOf(text);
    const errors = said.filter(({ severity }) => severity === 'error');
    expect(circuit).toBeUndefined();
    expect(errors.map((error) => [error.code, error.line])).toEqual(
      markedLines(text).map((line) => [code, line]),
    );
    expect(errors[0]!.message).toContain(way);
  });
});

/** What is taken, but worth a word: code and text. */
const remarks: Readonly<Record<string, readonly [code: string, text: string]>> = {
  'a forgotten branch': [
    'latch-inferred',
    `module m (input [1:0] s, input a, output reg q, p);
       always @* begin
         p = a;
         case (s)
           2'd0: q = a;
           2'd1: q = ~a; // here
         endcase
       end
     endmodule`,
  ],
  'a forgotten signal in an event list': [
    'sensitivity-incomplete',
    `module m (input a, b, output reg q);
       always @(a) // here
         q = a & b;
     endmodule`,
  ],
  'an asynchronous load': [
    'sensitivity-incomplete',
    `module m (input clk, load, input [3:0] d, output reg [3:0] q);
       always @(posedge clk or posedge load)
         if (load)
           q <= d; // here
         else q <= q + 1;
     endmodule`,
  ],
  'a bit that is not there': [
    'select-outside',
    `module m (input [3:0] a, output q);
       assign q = a[4]; // here
     endmodule`,
  ],
  'a task that prints': [
    'task-ignored',
    `module m (input clk, d, output reg q);
       always @(posedge clk) begin
         q <= d;
         $display("%b", d); // here
       end
     endmodule`,
  ],
};

describe('what is taken otherwise than it may be meant is said at its place:', () => {
  it.each(Object.entries(remarks))('%s', (_, [code, text]) => {
    const { circuit, said } = saidOf(text);
    expect(circuit).toBeDefined();
    expect(said.map((remark) => [remark.code, remark.line])).toEqual(
      markedLines(text).map((line) => [code, line]),
    );
  });
});

describe('delays', () => {
  it('are set aside before and inside of assignments, as all timing is', () => {
    const { circuit, said } = saidOf(
      `module m (input clk, d, output reg q, output y);
         always @(posedge clk) #1 q <= #1 d;
         assign #2 y = ~q;
       endmodule`,
    );
    expect(said).toEqual([]);
    expect(circuit?.registers.count).toBe(1);
  });
});
