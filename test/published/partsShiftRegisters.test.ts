import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { binary, circuitFrom, expectCourse, responseTo } from '../sequential/courses.js';
import { cells } from './partsCells.js';

// Function tables and logic diagrams of the 7400 series as in Texas Instruments, "The TTL Data
// Book for Design Engineers", 1973 and later; written down from memory.

describe('the 4-bit universal shift register (74x194)', () => {
  const part = circuitFrom(`${cells}
    module stage (input clk, clr_n, right, left, load, hold, from_left, p, from_right, output q);
      and (a, right, from_left), (b, load, p), (c, left, from_right), (d, hold, q);
      or (next, a, b, c, d);
      rising_d_clear ff (q, clk, next, clr_n);
    endmodule
    module part (input clk, clr_n, s1, s0, sl, sr, input [0:3] p, output [0:3] q);
      not (s1_n, s1), (s0_n, s0);
      and (load, s1, s0), (right, s1_n, s0), (left, s1, s0_n), (hold, s1_n, s0_n);
      stage bit[0:3] (clk, clr_n, right, left, load, hold, {sr, q[0:2]}, p, {q[1:3], sl}, q);
    endmodule`);

  // The typical sequence of the data sheet: clear, load, shift right, shift left, inhibit, clear.
  it('clears, loads, shifts both ways, holds and clears', () =>
    expectCourse(
      part,
      `// clr_n s1 s0 sl sr p : q, before the rising edge of the cycle
      0 1 1 0 0 1010 : 0000
      1 1 1 0 0 1010 : 0000
      1 0 1 0 1 0000 : 1010
      1 0 1 0 0 0000 : 1101
      1 0 1 0 1 0000 : 0110
      1 0 1 0 0 0000 : 1011
      1 1 0 0 0 0000 : 0101
      1 1 0 1 0 0000 : 1010
      1 1 0 1 0 0000 : 0101
      1 0 0 1 1 1111 : 1011
      1 0 0 0 0 1111 : 1011
      0 1 1 1 1 1111 : 0000
      1 0 0 0 0 0000 : 0000`,
    ));

  it('does in each of its states what its inputs say', async () => {
    const cases = Array.from({ length: 16 * 512 }, (_, i) => ({
      state: binary(i >> 9, 4),
      inputs: binary(i & 511, 9),
    }));
    const rows = cases.flatMap(({ state, inputs }) => [`1 11 00 ${state}`, inputs, '1 00 00 0000']);
    const expected = cases.flatMap(({ state, inputs }) => {
      const [clear, mode, sl, sr] = [inputs[0], inputs.slice(1, 3), inputs[3]!, inputs[4]!];
      if (clear === '0') return ['0000', '0000'];
      const next = {
        '00': state,
        '01': sr + state.slice(0, 3),
        '10': state.slice(1) + sl,
        '11': inputs.slice(5),
      }[mode];
      return [state, next];
    });
    const response = await responseTo(part, rows);
    expect(response.filter((_, i) => i % 3 > 0)).toEqual(expected);
  });

  it('moves what is unknown, and holds where the mode is unknown but all agree', () =>
    expectCourse(
      part,
      `0 0 0 x x xxxx : 0000
      1 0 1 x 1 xxxx : 0000
      1 1 0 x x xxxx : 1000
      1 0 x 0 0 0000 : 000x // shifts or holds
      1 1 1 x x 1x10 : 000x
      1 0 1 x x xxxx : 1x10
      1 0 0 x x xxxx : x1x1
      x 0 0 x x xxxx : xxxx`,
      { threeValued: true },
    ));
});

describe('the 8-bit shift register with a gated serial input (74x164)', () => {
  const part = circuitFrom(`${cells}
    module part (input clk, clr_n, a, b, output [0:7] q);
      and (d, a, b);
      rising_d_clear bit[0:7] (q, clk, {d, q[0:6]}, clr_n);
    endmodule`);

  it('follows its function table', () =>
    expectCourse(
      part,
      `// clr_n a b : q
      0 1 1 : 00000000
      1 1 1 : 00000000
      1 0 1 : 10000000
      1 1 0 : 01000000
      1 1 1 : 00100000
      1 1 1 : 10010000
      1 0 0 : 11001000
      1 1 1 : 01100100
      1 1 1 : 10110010
      1 0 0 : 11011001
      0 1 1 : 00000000
      1 0 0 : 00000000`,
    ));

  it('delays what its inputs agree on by one cycle a bit', async () => {
    const random = new RandomBits(164);
    const pairs = Array.from({ length: 1000 }, () => binary(random.next() & 3, 2));
    const taken = pairs.map((pair) => (pair === '11' ? '1' : '0'));
    const response = await responseTo(
      part,
      pairs.map((pair) => `1${pair}`),
    );
    const expected = pairs.map((_, cycle) =>
      Array.from({ length: 8 }, (_, bit) => taken[cycle - 1 - bit] ?? '0').join(''),
    );
    expect(response).toEqual(expected);
  });
});
