import { describe, expect, it } from 'vitest';
import { items, onlyProblem, read } from './reading.js';

describe('functions', () => {
  it.each([
    ['function f; input a; f = a; endfunction', 'function f; input a; f=a;'],
    [
      'function [7:0] f; input [7:0] a, b; reg c; begin c = a; f = c; end endfunction',
      'function [7:0] f; input [7:0] a,b; reg c; begin c=a; f=c; end',
    ],
    [
      'function automatic signed [3:0] f (input signed [3:0] a, b, input integer c); f = a; endfunction',
      'function automatic signed [3:0] f; input signed [3:0] a,b; input integer signed c; f=a;',
    ],
    [
      'function integer f (input a); integer i; f = a; endfunction',
      'function integer signed f; input a; integer signed i; f=a;',
    ],
    ['function real f; input real a; f = a; endfunction', 'function real f; input real a; f=a;'],
    ['function time f (input reg a); f = a; endfunction', 'function time f; input reg a; f=a;'],
    [
      'function f; input a; localparam L = 1; reg b; input c; f = a; endfunction',
      'function f; input a; localparam L=1; reg b; input c; f=a;',
    ],
  ])('%s', (text, shown) => {
    expect(items(text)).toEqual([shown]);
  });
});

describe('tasks', () => {
  it.each([
    ['task t; endtask', 'task t; ;'],
    ['task t; ; endtask', 'task t; ;'],
    ['task t (); a = 1; endtask', 'task t; a=1;'],
    [
      'task automatic t; input a; output reg [1:0] b; inout c; begin b = a; end endtask',
      'task automatic t; input a; output reg [1:0] b; inout c; begin b=a; end',
    ],
    [
      'task t (input a, b, output [1:0] c); c = a; endtask',
      'task t; input a,b; output [1:0] c; c=a;',
    ],
  ])('%s', (text, shown) => {
    expect(items(text)).toEqual([shown]);
  });
});

describe('faults', () => {
  it.each([
    [
      'function (input a); f = a; endfunction',
      "1:20 '(' expected the name of the function, found '('",
    ],
    ['task 1; endtask', "1:16 '1' expected the name of the task, found a number"],
    [
      'function f (a); f = a; endfunction',
      "1:23 'a' expected 'input', 'output' or 'inout', found 'a'",
    ],
    [
      'function f (input 1); f = a; endfunction',
      "1:29 '1' expected the name of an argument, found a number",
    ],
    ['function f (input a; f = a; endfunction', "1:30 ';' expected ',' or ')', found ';'"],
    [
      'function f; input a; f = a; f = 1; endfunction',
      "1:39 'f' expected 'endfunction' after the one statement of the function; group more with begin … end, found 'f'",
    ],
    ['function f; input a; f = ; endfunction', "1:36 ';' expected an expression, found ';'"],
    [
      'task t; a = 1;',
      "2:1 'endmodule' expected 'endtask' after the one statement of the task; group more with begin … end, found 'endmodule'",
    ],
  ])('%s', (text, problem) => {
    expect(onlyProblem(`module m; ${text}\nendmodule`)).toBe(`syntax-error ${problem}`);
  });

  it('what follows a faulty routine is read', () => {
    const { syntax, problems } = read(
      'module m; function f; f = ; g = 1; endfunction task t; 1; endtask wire w; endmodule',
    );
    expect(problems).toHaveLength(2);
    expect(syntax.modules[0]!.items.map((item) => item.kind)).toEqual(['declaration']);
  });
});
