import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import {
  departure,
  onEveryEngine,
  type Reading,
  randomInputs,
  rtlDesign,
  signed,
  type Values,
} from './circuits.js';
import { assembled, type Line, ops, processorModel } from './processorModel.js';

const HALT = 0xf000;
const hex = (word: number) => `16'h${word.toString(16).padStart(4, '0')}`;

/** Program memory as a case statement. */
const caseMemory = (words: readonly number[]) => `
  module rom (input [7:0] address, output reg [15:0] word);
    always @(address)
      case (address)
        ${words.map((word, at) => `8'd${at}: word = ${hex(word)};`).join('\n        ')}
        default: word = ${hex(HALT)};
      endcase
  endmodule`;

/** Program memory as an array that an initial block fills. */
const initialMemory = (words: readonly number[]) => `
  module rom (input [7:0] address, output [15:0] word);
    reg [15:0] words [0:${words.length}];
    initial begin
      ${words.map((word, at) => `words[${at}] = ${hex(word)};`).join('\n      ')}
      words[${words.length}] = ${hex(HALT)};
    end
    assign word = address <= ${words.length} ? words[address] : ${hex(HALT)};
  endmodule`;

/** The processor with a program of its own. */
const computer = (rom: string) =>
  rtlDesign(
    ['processor.v'],
    `module computer (input clk, rst_n, input [15:0] in_port, input [4:0] probe,
       output [7:0] pc, output [15:0] out_port, output out_strobe, halted, retired,
       output [15:0] probe_register, probe_memory, output probe_carry);
       wire [15:0] instruction;
       rom program (pc, instruction);
       processor cpu (.clk(clk), .rst_n(rst_n), .pc(pc), .instruction(instruction),
         .in_port(in_port), .out_port(out_port), .out_strobe(out_strobe), .halted(halted),
         .retired(retired), .probe(probe), .probe_register(probe_register),
         .probe_memory(probe_memory), .probe_carry(probe_carry));
     endmodule
     ${rom}`,
  );

/** A sieve over odd numbers from 3 on, one word of memory each; puts out the primes. */
const primes: Line[] = [
  ops.ldi(0, 0),
  ops.ldi(1, 0),
  ops.ldi(7, 32),
  'clear',
  ops.st(0, 1, 0),
  ops.addi(1, 1, 1),
  ops.sub(2, 1, 7),
  ops.bn(2, 'clear'),
  ops.ldi(3, 2),
  ops.out(3),
  ops.ldi(1, 0),
  'next',
  ops.ld(2, 1, 0),
  ops.bnz(2, 'skip'),
  ops.add(3, 1, 1),
  ops.addi(3, 3, 3),
  ops.out(3),
  // Multiples are this number of words apart.
  ops.add(4, 1, 3),
  'strike',
  ops.sub(2, 4, 7),
  ops.bn(2, 'within'),
  ops.bz(0, 'skip'),
  'within',
  ops.st(7, 4, 0),
  ops.add(4, 4, 3),
  ops.bz(0, 'strike'),
  'skip',
  ops.addi(1, 1, 1),
  ops.sub(2, 1, 7),
  ops.bn(2, 'next'),
  ops.halt,
];

const COUNT = 9;

/** Reads numbers, sorts them by insertion, and puts them out by a subroutine. */
const sort: Line[] = [
  ops.ldi(0, 0),
  ops.ldi(1, 0),
  ops.ldi(7, COUNT),
  'take',
  ops.input(2),
  // r3: the place that is free; larger numbers move up into it.
  ops.addi(3, 1, 0),
  'shift',
  ops.bz(3, 'put'),
  ops.ld(4, 3, -1),
  ops.slt(5, 2, 4),
  ops.bz(5, 'put'),
  ops.st(4, 3, 0),
  ops.addi(3, 3, -1),
  ops.bz(0, 'shift'),
  'put',
  ops.st(2, 3, 0),
  ops.addi(1, 1, 1),
  ops.sub(2, 1, 7),
  ops.bn(2, 'take'),
  ops.ldi(1, 0),
  'show',
  ops.jal(6, 'put out'),
  ops.sub(2, 1, 7),
  ops.bn(2, 'show'),
  ops.halt,
  'put out',
  ops.ld(2, 1, 0),
  ops.out(2),
  ops.addi(1, 1, 1),
  ops.jr(0, 6, 0),
];

/** Runs with one cycle of reset, then the probe going round; `input` changes all the time. */
function rowsFor(cycles: number): Values[] {
  const random = new RandomBits(10);
  return Array.from({ length: cycles }, (_, cycle) => ({
    rst_n: cycle > 0 ? 1 : 0,
    in_port: random.next() & 0xffff,
    probe: cycle & 31,
  }));
}

/** Runs a program to its end, and the model beside it; then looks at what it has put out. */
async function expectRun(
  rom: string,
  words: readonly number[],
  rows: readonly Values[],
  check: (output: readonly number[], read: Reading) => void,
): Promise<void> {
  const design = computer(rom);
  await onEveryEngine(design, rows, (read, engine) => {
    const model = processorModel((at) => words[at] ?? HALT);
    expect(departure(design, model, rows, read), engine).toBeUndefined();
    expect(read('halted', rows.length - 1), engine).toBe(1);
    const output = rows.flatMap((_, cycle) =>
      read('out_strobe', cycle) ? [read('out_port', cycle)] : [],
    );
    check(output, read);
  });
}

describe('the processor', () => {
  it('executes random instructions as its model does, and stays halted until it is reset', async () => {
    const design = rtlDesign(['processor.v']);
    const random = randomInputs(design, 11, 1500, ({ instruction }, chance, cycle) => ({
      rst_n: cycle === 0 || chance(500) ? 0 : 1,
      // A halt becomes an input.
      instruction: (instruction! & 0xf007) === HALT ? instruction! | 2 : instruction!,
    }));
    const directed = Array.from({ length: 40 }, (_, cycle) => ({
      rst_n: cycle === 0 || cycle === 30 ? 0 : 1,
      instruction: cycle === 9 ? HALT : 0x5e00 | cycle,
      in_port: 0,
      probe: 7,
    }));
    const rows = [...random, ...directed];
    await onEveryEngine(design, rows, (read, engine) => {
      expect(departure(design, processorModel(), rows, read), engine).toBeUndefined();
      const halted = directed.map((_, cycle) => read('halted', random.length + cycle));
      expect([halted.indexOf(1), halted.lastIndexOf(1)], engine).toEqual([11, 29]);
    });
  });

  it('computes primes, with its program in a case statement', async () => {
    const words = assembled(primes);
    await expectRun(caseMemory(words), words, rowsFor(1700), (output) => {
      const found = [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61];
      expect(output).toEqual(found);
    });
  });

  it('sorts what it reads, with its program in a memory that an initial block fills', async () => {
    const words = assembled(sort);
    const rows = rowsFor(800);
    await expectRun(initialMemory(words), words, rows, (output, read) => {
      const numbers = output.map((word) => signed(word, 16));
      expect(numbers.length).toBe(COUNT);
      expect(numbers).toEqual([...numbers].sort((a, b) => a - b));
      const given = new Set(rows.map(({ in_port }) => in_port));
      expect(output.every((word) => given.has(word))).toBe(true);
      // The memory holds the same in the end, where the probe last went round.
      const last = rows.length - 32;
      const memory = output.map((_, place) => read('probe_memory', last + ((place - last) & 31)));
      expect(memory).toEqual(output);
    });
  });
});
