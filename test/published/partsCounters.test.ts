import { describe, expect, it } from 'vitest';
import { binary, circuitFrom, expectCourse, responseTo } from '../sequential/courses.js';
import { cells } from './partsCells.js';

// Function tables, logic diagrams and count sequences of the 7400 series as in Texas Instruments,
// "The TTL Data Book for Design Engineers", 1973 and later; written down from memory.

const digits = (width: number) => (value: number) => binary(value, width);
const upTo = (count: number): number[] => Array.from({ length: count }, (_, i) => i);

describe('the synchronous 4-bit counter with synchronous load and clear (74x163)', () => {
  const counter = `${cells}
    module stage (input clk, clr_n, load_n, load, p, toggle, output q);
      xor (counted, q, toggle);
      and (keep, load_n, counted), (take, load, p);
      or (next, keep, take);
      and (d, clr_n, next);
      rising_d ff (q, clk, d);
    endmodule
    module counter (input clk, clr_n, load_n, enp, ent, input [3:0] p, output [3:0] q, output rco);
      wire [3:0] toggle;
      not (load, load_n);
      and (toggle[0], enp, ent);
      and (toggle[1], enp, ent, q[0]);
      and (toggle[2], enp, ent, q[0], q[1]);
      and (toggle[3], enp, ent, q[0], q[1], q[2]);
      stage bit[3:0] (clk, clr_n, load_n, load, p, toggle, q);
      and (rco, ent, q[0], q[1], q[2], q[3]);
    endmodule`;
  const part = circuitFrom(counter);

  // The typical sequence of the data sheet: clear, preset to twelve, count, inhibit.
  it('clears, loads twelve, counts over and is inhibited', () =>
    expectCourse(
      part,
      `// clr_n load_n enp ent p : q rco, before the rising edge of the cycle
      0 1 0 0 1100 : 0000 0
      1 0 0 0 1100 : 0000 0
      1 1 1 1 0000 : 1100 0
      1 1 1 1 0000 : 1101 0
      1 1 1 1 0000 : 1110 0
      1 1 1 1 0000 : 1111 1
      1 1 1 1 0000 : 0000 0
      1 1 1 1 0000 : 0001 0
      1 1 0 1 0000 : 0010 0
      1 1 1 0 0000 : 0010 0
      1 1 0 0 0000 : 0010 0`,
    ));

  it('is known from its first clear on', () =>
    expectCourse(
      part,
      `1 1 x x xxxx : xxxx x
      0 x x x xxxx : xxxx x
      1 1 1 1 xxxx : 0000 0
      1 0 x 0 01xx : 0001 0
      1 1 1 1 0000 : 01xx 0 // no carry reaches beyond the unknown bits for sure
      1 1 x 0 0000 : xxxx 0`,
      { threeValued: true },
    ));

  it('does in each of its states what its inputs say', async () => {
    const states = upTo(16).map(digits(4));
    const cases = states.flatMap((state) =>
      upTo(256).map((i) => ({ state, inputs: binary(i, 8) })),
    );
    const load = (state: string) => `1 0 0 0 ${state}`;
    const rows = cases.flatMap(({ state, inputs }) => [load(state), inputs, load('0000')]);
    const response = await responseTo(part, rows);
    const expected = cases.flatMap(({ state, inputs }) => {
      const [clear, loadNot, enp, ent] = Array.from(inputs, Number) as [number, ...number[]];
      const carry = ent && state === '1111' ? 1 : 0;
      const counted = binary((Number.parseInt(state, 2) + (enp! & ent!)) % 16, 4);
      const next = !clear ? '0000' : !loadNot ? inputs.slice(4) : counted;
      return [`${state} ${carry}`, `${next} 0`];
    });
    expect(response.filter((_, i) => i % 3 > 0)).toEqual(expected);
  });

  it('counts to 256 as a cascade of two', async () => {
    const cascade = circuitFrom(`${counter}
      module cascade (input clk, clr_n, output [7:0] q, output rco);
        counter low (clk, clr_n, 1'b1, 1'b1, 1'b1, 4'b0, q[3:0], carry);
        counter high (clk, clr_n, 1'b1, 1'b1, carry, 4'b0, q[7:4], rco);
      endmodule`);
    const rows = ['0', ...upTo(600).map(() => '1')];
    const expected = upTo(600).map((i) => `${binary(i % 256, 8)} ${i % 256 === 255 ? 1 : 0}`);
    expect((await responseTo(cascade, rows)).slice(1)).toEqual(expected);
  });
});

describe('the ripple counter of a two and an eight (74x93)', () => {
  const counter = `${cells}
    module counter (input ck_a, ck_b, r1, r2, output qa, qb, qc, qd);
      and (clr, r1, r2);
      falling_jk a (qa, ck_a, 1'b1, 1'b1, 1'b0, clr);
      falling_jk b (qb, ck_b, 1'b1, 1'b1, 1'b0, clr);
      falling_jk c (qc, qb, 1'b1, 1'b1, 1'b0, clr);
      falling_jk d (qd, qc, 1'b1, 1'b1, 1'b0, clr);
    endmodule`;
  /** The two joined to sixteen, cleared by what the connections say. */
  const joined = (r1: string, r2: string) =>
    circuitFrom(`${counter}
      module joined (input ck_a, output qd, qc, qb, qa);
        counter part (ck_a, qa, ${r1}, ${r2}, qa, qb, qc, qd);
      endmodule`);
  const spaced = (value: number): string => Array.from(binary(value, 4)).join(' ');

  it('divides by two and by eight', async () => {
    const rows = upTo(40).map(() => '0 1');
    const expected = upTo(40).map((i) => {
      const [qd, qc, qb] = binary(i % 8, 3);
      return [i % 2, qb, qc, qd].join(' ');
    });
    expect(await responseTo(circuitFrom(counter), rows)).toEqual(expected);
  });

  it('counts while one of its reset inputs is low', () =>
    expectCourse(
      circuitFrom(counter),
      `// r1 r2 : qa qb qc qd, before the falling edge of the cycle
      1 1 : 0000
      0 1 : 0000
      0 0 : 1100
      1 0 : 0010
      1 1 : 0000
      1 1 : 0000
      0 0 : 0000
      0 0 : 1100`,
    ));

  // Outputs wired back to the reset inputs, as application notes do; the state that resets is gone
  // before anyone can sample it.
  it.each([
    [16, "1'b0", "1'b0"],
    [12, 'qc', 'qd'],
    [10, 'qb', 'qd'],
    [9, 'qa', 'qd'],
  ])('counts to %i with its reset inputs at %s and %s', async (modulus, r1, r2) => {
    const response = await responseTo(
      joined(r1, r2),
      upTo(40).map(() => ''),
    );
    expect(response).toEqual(upTo(40).map((i) => spaced(i % modulus)));
  });
});

describe('the decade counter of a two and a five (74x90)', () => {
  const counter = `${cells}
    module counter (input ck_a, ck_b, r01, r02, r91, r92, output qa, qb, qc, qd);
      and (nine, r91, r92);
      nand (nine_n, r91, r92);
      and (zero, r01, r02, nine_n);
      or (low, zero, nine);
      and (j_d, qb, qc);
      not (j_b, qd);
      falling_jk a (qa, ck_a, 1'b1, 1'b1, nine, zero);
      falling_jk b (qb, ck_b, j_b, 1'b1, 1'b0, low);
      falling_jk c (qc, qb, 1'b1, 1'b1, 1'b0, low);
      falling_jk d (qd, ck_b, j_d, qd, nine, zero);
    endmodule`;
  const resets = upTo(16).map((i) => Array.from(binary(i, 4)).join(' '));

  it('resets to zero and to nine by its table', async () => {
    const expected = resets.map((inputs) => {
      const [r01, r02, r91, r92] = inputs.split(' ');
      if (r91 === '1' && r92 === '1') return '1 0 0 1';
      return r01 === '1' && r02 === '1' ? '0 0 0 0' : '1 1 0 0';
    });
    // From zero, a cycle of both clocks in front of each row.
    const rows = resets.flatMap((inputs) => ['1 1 0 0', '0 0 0 0', inputs]);
    const response = await responseTo(circuitFrom(counter), rows);
    expect(response.filter((_, i) => i % 3 === 2)).toEqual(expected);
  });

  it('counts in binary-coded decimal where the five follows the two', async () => {
    const part = circuitFrom(`${counter}
      module decade (input ck_a, output qd, qc, qb, qa);
        counter part (ck_a, qa, 1'b0, 1'b0, 1'b0, 1'b0, qa, qb, qc, qd);
      endmodule`);
    const response = await responseTo(
      part,
      upTo(35).map(() => ''),
    );
    expect(response).toEqual(upTo(35).map((i) => Array.from(binary(i % 10, 4)).join(' ')));
  });

  // The bi-quinary sequence of the data sheet: qa qd qc qb.
  const biquinary = [
    '0000',
    '0001',
    '0010',
    '0011',
    '0100',
    '1000',
    '1001',
    '1010',
    '1011',
    '1100',
  ];

  it('counts bi-quinary where the two follows the five: a square wave of a tenth', async () => {
    const part = circuitFrom(`${counter}
      module biquinary (input ck_b, output qa, qd, qc, qb);
        counter part (qd, ck_b, 1'b0, 1'b0, 1'b0, 1'b0, qa, qb, qc, qd);
      endmodule`);
    const response = await responseTo(
      part,
      upTo(35).map(() => ''),
    );
    expect(response.map((row) => row.replaceAll(' ', ''))).toEqual(
      upTo(35).map((i) => biquinary[i % 10]),
    );
  });
});
