import { describe, expect, it } from 'vitest';
import { bench, problemsOf } from './bench.js';

/** Power-up value of a signal as bits; `-` where there is none. */
function initialBits(items: string, name: string): string {
  const { initialValues, nets, diagnostics } = bench(items);
  expect(diagnostics).toEqual([]);
  return nets(name)
    .map((net) => initialValues.get(net) ?? '-')
    .reverse()
    .join('');
}

describe('an initial block', () => {
  it('gives variables constant values', () => {
    expect(initialBits("reg [3:0] q; initial q = 4'b10x1;", 'q')).toBe('10-1');
    expect(initialBits('reg [3:0] q; initial q <= 5;', 'q')).toBe('0101');
    expect(initialBits("reg a; reg [2:0] q; initial {a, q[2:1]} = 3'b110;", 'q')).toBe('10-');
  });

  it('works with values assigned before, in it and in earlier ones', () => {
    const items = `
      reg [7:0] a, b; integer i;
      initial begin a = 3; for (i = 0; i < 4; i = i + 1) a = a + i; end
      initial begin : second reg [7:0] t; t = a * 2; if (t == 18) b = t; else b = 0; end`;
    expect(initialBits(items, 'a')).toBe('00001001');
    expect(initialBits(items, 'b')).toBe('00010010');
    expect(initialBits(items, 'i')).toBe('-'.repeat(32));
  });

  it('may call functions and tasks', () => {
    const items = `
      reg [7:0] q;
      function [7:0] gray(input [7:0] v); gray = v ^ (v >> 1); endfunction
      task set(input [7:0] v); q = gray(v); endtask
      initial set(8'd200);`;
    expect(initialBits(items, 'q')).toBe((200 ^ 100).toString(2).padStart(8, '0'));
  });

  it.each([
    ['a delay', 'q = 2; #10 q = 1; q = 3;', '10'],
    ['a delay in a block', 'q = 2; begin : b #10; end q = 1;', '10'],
    ['a delay in a loop', 'for (i = 0; i < 3; i = i + 1) begin q = 2 + i; #5; end', '10'],
    ['a delay in a chosen branch', 'q = 2; if (q == 2) #1 q = 1; q = 0;', '10'],
    ['a delay in a branch under x', 'q = 2; if (u) #1; q = 3;', '1-'],
    ['a delay in a task', 'q = 2; slow(q); q = 3;', '10'],
    ['a delay in an assignment', 'q = 2; q = #3 1; q = 3;', '10'],
    ['a delay of a non-blocking assignment', 'q <= #3 1; q = 2;', '10'],
    ['an event control', 'q = 2; @(posedge w) q = 1;', '10'],
    ['a wait', 'q = 2; wait (w) q = 1;', '10'],
  ])('leaves out what comes after %s, with a warning', (_, text, value) => {
    const items = `
      wire w; reg u; integer i; reg [1:0] q;
      task slow(output [1:0] r); begin r = 1; #1 r = 0; end endtask
      initial begin ${text} end`;
    const { initialValues, nets, diagnostics } = bench(items);
    const bits = nets('q').map((net) => initialValues.get(net) ?? '-');
    expect(bits.reverse().join('')).toBe(value);
    expect(diagnostics.map(({ code, severity }) => [code, severity])).toEqual([
      ['initial-delayed', 'warning'],
    ]);
  });

  it('goes on after a delay of 0, which ends at time 0', () => {
    expect(initialBits('reg [1:0] q; initial begin q = 2; #0 q = 1; end', 'q')).toBe('01');
  });

  it('notes the tasks that only print', () => {
    const problems = problemsOf('reg q; initial begin q = 1; $display("%b", q); $finish; end');
    expect(problems.map(({ code, at }) => [code, at])).toEqual([
      ['task-ignored', '$display("%b", q);'],
      ['task-ignored', '$finish;'],
    ]);
  });

  it.each([
    ['q = w;', 'constant-required', 'w'],
    ['w = 1;', 'target-invalid', 'w'],
    ['forever q = ~q;', 'not-supported', ''],
    ['q = @(posedge w) 1;', 'not-supported', ''],
    ['$readmemb("rom.txt", q);', 'target-invalid', 'q'],
  ])('is refused: %s', (text, code, at) => {
    const problems = problemsOf(`wire w; reg q; initial begin ${text} end`);
    expect(problems.map((problem) => [problem.code, problem.at])).toEqual([[code, at]]);
  });
});
