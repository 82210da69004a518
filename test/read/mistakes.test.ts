import { describe, expect, it } from 'vitest';
import { diagnosticText } from '../../compiler/cli/printDiagnostics.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';

const netlist = `module top (input clk, input rst, input [3:0] a, output reg [3:0] q, output y);
  wire [3:0] n;
  inv u1 (.a(a[0]), .y(n[0]));
  inv u2 (.a(a[1]), .y(n[1]));
  assign n[3:2] = a[3:2];
  assign y = ^n;
  always @(posedge clk or posedge rst)
    if (rst) q <= 4'b0;
    else q <= n;
endmodule

module inv (input a, output y);
  not (y, a);
endmodule
`;

/** What a user is told of a text: the first line of each error, and the caret's line of the first. */
function told(path: string, text: string) {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source(path, text)], {}, diagnostics);
  const errors = diagnostics.list.filter(({ severity }) => severity === 'error');
  const lines = errors.map((error) => diagnosticText(error).split('\n'));
  return {
    circuit,
    messages: lines.map(([first]) => first!.replace(/^[^:]*:(\d+:\d+): error: /, '$1 ')),
    caret: lines[0]?.[2]?.indexOf('^'),
    excerpt: lines[0]?.[1],
  };
}

/** The netlist with one stretch of it replaced. */
function withMistake(from: string, to: string): string {
  expect(netlist.split(from)).toHaveLength(2);
  return netlist.replace(from, to);
}

describe('a mistake in a netlist', () => {
  it('is none before it is made', () => {
    expect(told('t.v', netlist).messages).toEqual([]);
  });

  it.each([
    ['y = ^n;', 'y = ^n', "6:16 expected ';' after the assignment, found 'always' on a later line"],
    ['.y(n[0]));', '.y(n[0]))', "3:30 expected ';', found 'inv' on a later line"],
    ['[3:0] n;', '[3:0] n', "2:15 expected ',' or ';' after the declared name, found 'inv' on a"],
    ['input rst,', 'input rst', "1:34 expected ',' or ')' after the port, found 'input'"],
    ['posedge rst)', 'posedge rst', "7:38 expected 'or', ',' or ')' after the event, found 'if'"],
    ['endmodule\n\n', '\n\n', "1:1 the module 'top' has no 'endmodule' before 'module'"],
    ['else q <= n;', 'else begin q <= n;', "10:1 expected a statement or 'end', found 'endmodule'"],
    ['y = ^n;', 'y == ^n;', "6:12 expected '=' and the value of the assignment, found '=='"],
    ['y = ^n;', 'y = ^nets;', '6:15 `nets` is not declared here; declare it or mend its spelling'],
    ['(input clk,', '(input clock,', '7:20 `clk` is not declared here; declare it or mend its'],
    ['.y(n[1])', '.z(n[1])', '4:22 inv has no port z; it has a, y'],
    ['.y(n[1])', '.Y(n[1])', '4:22 inv has no port Y; it has a, y; did you mean y?'],
    ['.y(n[1])', '.a(n[1])', '4:22 port a of u2 is connected twice; remove one of the two'],
    ['.y(n[1]));', '.y(n[1]), .q());', '4:32 inv has no port q; it has a, y'],
    [
      'inv u2',
      'ivn u2',
      '4:3 no file defines module ivn (1 instance, pins a, y; did you mean inv?)',
    ],
    [
      'inv u2',
      'INV u2',
      '4:3 no file defines module INV (1 instance, pins a, y; did you mean inv?)',
    ],
    [
      'inv u2',
      'NAND2 u2',
      '4:3 no file defines module NAND2 (1 instance, pins a, y). Add the file',
    ],
    ['inv u2 (', 'inv (', '4:3 the instance of module inv has no name; give it one'],
    ['inv u2', 'inv u1', '4:7 u1 is declared already; remove or rename one of the two'],
    ['assign y = ^n;', 'assign q = n;', '6:10 `q` is a variable, which only procedures assign;'],
    ['output reg [3:0] q', 'output [3:0] q', '8:14 `q` is a net, which procedures cannot assign;'],
    ['y = ^n;', 'y = ^n; assign y = a[0];', '6:25 y has 2 drivers; leave one of them'],
    [
      '= a[3:2];',
      '= a[2:3];',
      '5:19 the part [2:3] runs against the declaration [3:0]; swap its numbers',
    ],
    ["4'b0;", "4'b02;", "8:19 '2' is no digit of base 2, in a number such as 4'b01xz"],
    ["4'b0;", '4’b0;', "8:20 '’' has no meaning here; write ' instead"],
    [
      "4'b0;",
      '`ZERO;',
      "8:19 the macro '`ZERO' is not defined; define it before, or with --define",
    ],
    ['assign y', 'assign\u00a0y', '6:9 the character U+00A0 has no meaning here; remove it'],
    [
      'wire [3:0] n;',
      'wire \ufeff[3:0] n;',
      '2:8 the character U+FEFF has no meaning here; remove it',
    ],
    [
      'module top',
      '`include "cells.vh"\nmodule top',
      '1:1 the included file "cells.vh" is not found',
    ],
    ['wire [3:0] n;', 'wire [3:0] n; wire \\a+b;', "2:27 expected ',' or ';' after the declared"],
    [
      'wire [3:0] n;',
      'wire [3:0] n; wire table;',
      "2:22 expected the name to declare, found 'table'",
    ],
    [
      'output reg',
      'output logic',
      "1:69 expected ',' or ')' after the port, found 'q'; 'logic' is",
    ],
    ['always @', 'always_ff @', "7:13 expected the name of an instance, found '@'; 'always_ff' is"],
    [
      'or posedge rst',
      'or rst',
      '7:27 an event list cannot mix edges and levels; give every signal',
    ],
    ['  assign y = ^n;\n', '<<<<<<< ours\n', '6:1 expected a declaration, an instance or another'],
    [
      'not (y, a);',
      'and (y);',
      '13:3 and takes an output and at least one input, got 1 connection',
    ],
    ['module inv', '/* module inv', "12:1 the comment has no end '*/'"],
    ['not (y, a);', 'initial $display("a);', "13:20 the string has no end '\"' on its line"],
    ['(input a, output y);', '(a, y, z); input a; output y;', '12:19 port z has no direction;'],
    [
      'inv (input a',
      'inv #(parameter W = 1) (inputt a',
      "12:39 expected ',' or ')' after the port",
    ],
    ['inv u1 (', 'inv #(.WIDTH(2)) u1 (', '3:10 module inv has no parameter WIDTH; it has none'],
  ])('%j for %j is told where it is, with the way out', (from, to, message) => {
    const { circuit, messages, caret, excerpt } = told('t.v', withMistake(from, to));
    expect(circuit).toBeUndefined();
    expect(messages[0]).toContain(message);
    // One fault, one message, or a second one about what it leads to.
    expect(messages.length).toBeLessThanOrEqual(3);
    // The caret is below what the message is about.
    expect(caret).toBeGreaterThanOrEqual(4);
    expect(caret).toBeLessThanOrEqual(excerpt!.length);
  });

  it('is told of in the column that an editor shows, with tabs and returns in the line too', () => {
    const text = netlist.replace('^n;', '^nets;').replaceAll('  ', '\t').replaceAll('\n', '\r\n');
    const { messages, excerpt, caret } = told('t.v', text);
    expect(messages).toEqual([expect.stringContaining('6:14 `nets` is not declared here')]);
    expect(excerpt!.slice(caret)).toBe('nets;');
  });

  it.each([
    ['t.v', '', '1:1 the files define no module; name a file with one'],
    ['t.v', '// nothing\n', '1:1 the files define no module; name a file with one'],
    ['t.txt', netlist, '1:1 the ending .txt tells no form; rename it to .v for Verilog,'],
    ['t.v', `${netlist}foo bar\n`, "15:1 expected 'module' or 'primitive', found 'foo'"],
    [
      't.bench',
      'INPUT(a)\ny = NOT(b)\n',
      '2:9 b is used but neither an input nor defined by a gate',
    ],
    ['t.bench', 'INPUT(a)\ny = FOO(a)\n', '2:5 unknown kind of gate FOO; known are AND, NAND'],
    ['t.bench', '', '1:1 the file is empty; INPUT, OUTPUT or the name of a net was expected'],
    ['t.lib', 'library (l) {\n  cell (c) {\n', '2:3 cell c is not closed'],
  ])('is told of a whole file: %s with %j', (path, text, message) => {
    const { circuit, messages } = told(path, text);
    expect(circuit).toBeUndefined();
    expect(messages[0]).toContain(message);
  });
});
