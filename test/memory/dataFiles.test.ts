import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { circuitOfText, reading } from './circuits.js';

// The form of data files and the addresses of the tasks are those of IEEE 1364-2005, 17.2.9.

/** A memory of 64 words of 12 bits, filled by a task from the file `data`. */
const filled = (arguments_: string, task = '$readmemh', array = 'reg [11:0] m [0:63]') =>
  `module top (input [5:0] a, output [11:0] q);
  ${array};
  initial ${task}("data", ${arguments_});
  assign q = m[a];
endmodule`;

const read = (data: string, arguments_ = 'm', task?: string) =>
  reading(filled(arguments_, task), { files: { data } });

/** Words of the memory from the first one on: hexadecimal, `x` for a digit with a bit that is x. */
function wordsOf(data: string, arguments_ = 'm', task?: string): string[] {
  const { circuit } = read(data, arguments_, task);
  const { initial, width, depth } = circuit!.memories[0]!;
  expect([width, depth]).toEqual([12, 64]);
  if (initial === undefined) return [];
  const words = Array.from({ length: depth }, (_, word) => {
    const [low, high, lowX, highX] = initial.subarray(word * 4, word * 4 + 4);
    const digit = (bits: number, unknown: number) => (unknown ? 'x' : bits.toString(16));
    return (
      digit(high! & 15, highX! & 15) + digit(low! >> 4, lowX! >> 4) + digit(low! & 15, lowX! & 15)
    );
  });
  const last = words.findLastIndex((word) => word !== 'xxx');
  return words.slice(0, last + 1);
}

describe('a data file for $readmemh', () => {
  it('gives words from the lowest address on', () => {
    expect(wordsOf('1 2a\t3F_f\n abc')).toEqual(['001', '02a', '3ff', 'abc']);
  });

  it('has comments between its words', () => {
    expect(wordsOf('// one\n1/* two\n */2 //3\n/**/4/***/')).toEqual(['001', '002', '004']);
  });

  it('has addresses that are hexadecimal', () => {
    expect(wordsOf('@2 7 8\n@0a 9 @1\n5')).toEqual([
      'xxx',
      '005',
      '007',
      '008',
      'xxx',
      'xxx',
      'xxx',
      'xxx',
      'xxx',
      'xxx',
      '009',
    ]);
  });

  it('has digits x and z, which fill a word to the left', () => {
    expect(wordsOf('x 1x z2 0x3 ?'.replace(' ?', ''))).toEqual(['xxx', '01x', 'xx2', '0x3']);
  });

  it('fills from a start address on', () => {
    expect(wordsOf('1 2', 'm, 2')).toEqual(['xxx', 'xxx', '001', '002']);
  });

  it('fills up to a finish address, also downwards', () => {
    expect(wordsOf('1 2 3', 'm, 1, 3')).toEqual(['xxx', '001', '002', '003']);
    expect(wordsOf('1 2 3', 'm, 3, 1')).toEqual(['xxx', '003', '002', '001']);
    expect(read('1 2 3', 'm, 3, 1').found).toEqual([]);
  });

  it.each([
    ['1 2\n  3g', 'm', 'syntax-error data 2:4'],
    ["1 2\n 8'h3", 'm', 'syntax-error data 2:3'],
    ['1 /* 2', 'm', 'syntax-error data 1:3'],
    ['1\n@ 2', 'm', 'syntax-error data 2:1'],
    ['1\n@g 2', 'm', 'syntax-error data 2:2'],
    ['1\n@40 2', 'm', 'range-invalid data 2:1'],
    ['@1 1\n@4 2', 'm, 1, 3', 'range-invalid data 2:1'],
    ['1 2', 'm, 64', 'range-invalid top.v 3:32'],
    ['1 2\n3', 'm, 0, 1', 'memory-data data 2:1'],
    ['1 2', 'm', 'memory-data data 1:4'],
    ['1 2', 'm, 0, 3', 'memory-data data 1:4'],
    ['@0 1\n1abc', 'm', 'memory-data data 2:1'],
  ])('%j for %s gives %s', (data, arguments_, expected) => {
    expect(read(data, arguments_).found).toEqual([expected]);
  });

  it('is told that it is missing at the task', () => {
    expect(reading(filled('m')).found).toEqual(['file-unreadable top.v 3:21']);
  });

  it('is asked for in an initial block, for an array', () => {
    const text = (body: string) => `module top (input clk, input [5:0] a, output reg [7:0] q);
  reg [7:0] m [0:63];
  reg [7:0] n [0:7][0:7];
  ${body}
  always @(posedge clk) q <= m[a];
endmodule`;
    const found = (body: string) => reading(text(body), { files: { data: '1' } }).found;
    expect(found('always @(posedge clk) $readmemh("data", m);')).toEqual([
      'not-supported top.v 4:25',
    ]);
    expect(found('initial $readmemh("data", q);')).toEqual(['target-invalid top.v 4:29']);
    expect(found('initial $readmemh("data");')).toEqual(['argument-count top.v 4:11']);
    expect(found('initial $readmemh("data", n);')).toEqual(['not-supported top.v 4:29']);
  });
});

describe('a data file for $readmemb', () => {
  it('has binary digits alone', () => {
    expect(wordsOf('1 1010_0101 x z10 @6 11', 'm', '$readmemb')).toEqual([
      '001',
      '0a5',
      'xxx',
      'xxx',
      'xxx',
      'xxx',
      '003',
    ]);
    expect(read('1 2', 'm', '$readmemb').found).toEqual(['syntax-error data 1:3']);
  });
});

describe('a data file', () => {
  it('is named by a parameter of each instance', () => {
    const text = `module rom #(parameter FILE = "none", parameter BITS = 8) (input [5:0] a, output [BITS-1:0] q);
  reg [BITS-1:0] m [0:63];
  initial $readmemh(FILE, m, 0, 1);
  assign q = m[a];
endmodule
module top (input [5:0] a, output [7:0] p, q);
  rom #(.FILE("one")) first (a, p);
  rom #(.FILE("two")) second (a, q);
endmodule`;
    const { memories } = circuitOfText(text, { files: { one: '11 22', two: '33 44' } });
    const firstBytes = memories.map(({ name, initial }) => [name, initial![0], initial![2]]);
    expect(firstBytes).toEqual([
      ['first.m', 0x11, 0x22],
      ['second.m', 0x33, 0x44],
    ]);
  });

  it('fills an array built from registers, and what comes later wins', () => {
    const text = `module top (input [1:0] a, output [3:0] q);
  reg [3:0] m [0:3];
  initial begin m[0] = 9; m[3] = 9; $readmemh("data", m); m[1] = 5; end
  always @(posedge a[0]) m[a] <= 1;
  assign q = m[a];
endmodule`;
    const { circuit } = reading(text, { files: { data: '1 2 x' } });
    expect(circuit!.memories).toEqual([]);
    const values = Array.from({ length: 4 }, (_, word) =>
      [...circuit!.registers.initial.subarray(word * 4, word * 4 + 4)].reverse().join(''),
    );
    expect(values).toEqual(['0001', '0101', '2222', '1001']);
  });
});

describe('initial contents', () => {
  it('are what an initial block leaves, in its order', () => {
    const text = `module top (input clk, input [9:0] a, output reg [15:0] q);
  reg [15:0] m [0:1023];
  integer i;
  initial begin
    for (i = 0; i < 1000; i = i + 1) m[i] = i * i;
    m[7][3:0] = 4'hx;
    m[8] = m[9] + 1;
    if (m[10] == 100) m[11] = 16'hbeef;
  end
  always @(posedge clk) q <= m[a];
endmodule`;
    const { circuit, found } = reading(text);
    expect(found).toEqual([]);
    const { initial } = circuit!.memories[0]!;
    const word = (at: number) => [...initial!.subarray(at * 4, at * 4 + 4)];
    expect(word(5)).toEqual([25, 0, 0, 0]);
    expect(word(7)).toEqual([0x30, 0, 15, 0]);
    expect(word(8)).toEqual([82, 0, 0, 0]);
    expect(word(11)).toEqual([0xef, 0xbe, 0, 0]);
    expect(word(1000)).toEqual([0, 0, 255, 255]);
  });
});

describe('data files on the command line', () => {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-'));
  afterAll(() => rmSync(folder, { recursive: true }));

  it('are found beside the source and then in the folders given', async () => {
    const { loadCircuit } = await import('../../compiler/cli/netlists.js');
    const [source, data] = ['source', 'data'].map((name) => join(folder, name));
    for (const path of [source!, data!]) mkdirSync(path);
    writeFileSync(join(source!, 'top.v'), filled('m, 0, 0'));
    writeFileSync(join(data!, 'data'), '7');
    const load = (...include: string[]) => loadCircuit([join(source!, 'top.v')], { include });
    await expect(load()).rejects.toThrow('there is no file data');
    const { circuit } = await load(data!);
    expect(circuit.memories[0]!.initial![0]).toBe(7);
    writeFileSync(join(source!, 'data'), '5');
    expect((await load(data!)).circuit.memories[0]!.initial![0]).toBe(5);
  });
});
