import { describe, expect, it } from 'vitest';
import {
  anyOf,
  expectModel,
  type Model,
  onEveryEngine,
  randomInputs,
  rtlDesign,
  type Values,
} from './circuits.js';

interface Kind {
  readonly depth: number;
  readonly almost: number;
  readonly fallsThrough: boolean;
}

const bitsFor = (count: number): number => count.toString(2).length;

/** A first-in first-out memory of a kind. */
const fifo = ({ depth, almost, fallsThrough }: Kind) =>
  rtlDesign(
    ['fifo.v'],
    anyOf(
      'fifo',
      { DEPTH: depth, ALMOST: almost, FALL_THROUGH: fallsThrough ? 1 : 0 },
      `input clk, rst_n, write, read, input [7:0] din, output [7:0] dout, output empty, full,
       almost_full, overflow, underflow, output [${bitsFor(depth) - 1}:0] fill`,
    ),
  );

const queue =
  ({ depth, almost, fallsThrough }: Kind) =>
  (): Model => {
    let words: number[] = [];
    let out: number | undefined;
    let overflow = 0;
    let underflow = 0;
    return ({ rst_n, write, read, din }) => {
      if (!rst_n) {
        words = [];
        [overflow, underflow] = [0, 0];
      }
      const fill = words.length;
      const shown = fallsThrough ? words[0] : out;
      const outputs = {
        empty: fill === 0 ? 1 : 0,
        full: fill === depth ? 1 : 0,
        almost_full: fill >= almost ? 1 : 0,
        overflow,
        underflow,
        fill,
        ...(shown !== undefined && { dout: shown }),
      };
      if (!rst_n) return outputs;
      if (read) {
        if (fill === 0) underflow = 1;
        else out = words.shift();
      }
      if (write) {
        if (fill === depth) overflow = 1;
        else words.push(din!);
      }
      return outputs;
    };
  };

describe('the first-in first-out memory', () => {
  const kinds: readonly Kind[] = [
    { depth: 8, almost: 6, fallsThrough: false },
    { depth: 8, almost: 7, fallsThrough: true },
    { depth: 5, almost: 4, fallsThrough: false },
    { depth: 3, almost: 2, fallsThrough: true },
  ];
  it.each(kinds)('gives words in order and tells its fill: %o', async (kind) => {
    const design = fifo(kind);
    const rows = randomInputs(design, kind.depth, 1200, (_, chance, cycle) => {
      // It fills up, runs empty, and goes half full, in turn.
      const [writes, reads] = [
        [2, 5],
        [5, 2],
        [2, 2],
      ][Math.floor(cycle / 60) % 3] as [number, number];
      return {
        rst_n: cycle === 0 || chance(500) ? 0 : 1,
        write: chance(writes) ? 1 : 0,
        read: chance(reads) ? 1 : 0,
      };
    });
    await expectModel(design, queue(kind), rows);
  });

  it('is filled to the brim and emptied', async () => {
    const rows: Values[] = [
      { rst_n: 0, write: 0, read: 0, din: 0 },
      ...Array.from({ length: 10 }, (_, i) => ({ rst_n: 1, write: 1, read: 0, din: 10 + i })),
      ...Array.from({ length: 10 }, () => ({ rst_n: 1, write: 0, read: 1, din: 0 })),
    ];
    const design = fifo({ depth: 8, almost: 6, fallsThrough: true });
    await onEveryEngine(design, rows, (read, engine) => {
      const column = (port: string) => rows.map((_, cycle) => read(port, cycle));
      const fill = [0, 0, 1, 2, 3, 4, 5, 6, 7, 8, 8, 8, 7, 6, 5, 4, 3, 2, 1, 0, 0];
      expect(column('fill'), engine).toEqual(fill);
      expect(column('full'), engine).toEqual(fill.map((count) => (count === 8 ? 1 : 0)));
      expect(column('almost_full'), engine).toEqual(fill.map((count) => (count >= 6 ? 1 : 0)));
      expect(column('dout').slice(11, 19), engine).toEqual([10, 11, 12, 13, 14, 15, 16, 17]);
      expect([column('overflow').indexOf(1), column('underflow').indexOf(1)]).toEqual([10, 20]);
    });
  });
});
