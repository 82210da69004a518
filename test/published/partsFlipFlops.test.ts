import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { circuitFrom, expectCourse, responseTo } from '../sequential/courses.js';
import { cells } from './partsCells.js';

// Function tables and logic diagrams of the 7400 series as in Texas Instruments, "The TTL Data
// Book for Design Engineers", 1973 and later; written down from memory.

/** The gates of a text in another order, which numbers their nets otherwise. */
function shuffled(gates: readonly string[], seed: number): string[] {
  const random = new RandomBits(seed);
  const rest = [...gates];
  return gates.map(() => rest.splice(random.next() % rest.length, 1)[0]!);
}

describe('the D flip-flop with preset and clear of six NAND gates (74x74)', () => {
  const gates = [
    'nand (a, pre_n, b4, s);',
    'nand (s, a, clr_n, clk);',
    'nand (r, s, clk, b4);',
    'nand (b4, r, d, clr_n);',
    'nand (q, pre_n, s, q_n);',
    'nand (q_n, q, clr_n, r);',
  ];
  const flipFlop = (order: readonly string[]) =>
    circuitFrom(`module part (input pre_n, clr_n, clk, d, output q, q_n);
      wire a, b4, s, r; ${order.join('\n')} endmodule`);
  const functionTable = `
    // pre_n clr_n clk d : q q_n
    0 1 0 0 : 1 0
    0 1 1 1 : 1 0
    0 1 0 1 : 1 0
    1 1 0 1 : 1 0 // clock low: holds
    1 0 0 1 : 0 1
    1 0 1 0 : 0 1
    1 0 1 1 : 0 1
    1 0 0 1 : 0 1
    1 1 0 1 : 0 1
    1 1 1 1 : 1 0 // rising edge takes d
    1 1 1 0 : 1 0 // clock high: d does not matter
    1 1 0 0 : 1 0 // nor does the falling edge
    1 1 1 0 : 0 1
    1 1 1 1 : 0 1
    1 1 0 1 : 0 1
    0 0 0 1 : 1 1 // both active: both outputs high
    0 0 1 1 : 1 1
    1 0 1 1 : 0 1 // until one of the two is released
    0 0 1 1 : 1 1
    0 1 1 1 : 1 0`;

  it('follows its function table', () => expectCourse(flipFlop(gates), functionTable));

  it('follows it from an unknown power-up, and is known from the first preset on', () =>
    expectCourse(flipFlop(gates), `1 1 0 1 : x x\n${functionTable}`, { threeValued: true }));

  /** The function table as a program, for inputs that change one at a time. */
  function expected(rows: readonly string[]): string[] {
    let q = 0;
    return rows.map((row, i) => {
      const [pre, clr, clk, d] = Array.from(row, Number) as [number, number, number, number];
      const before = Number(rows[i - 1]?.[2] ?? 1);
      if (pre && clr && clk && !before) q = d;
      if (!pre && !clr) return '1 1';
      if (!pre) q = 1;
      if (!clr) q = 0;
      return `${q} ${1 - q}`;
    });
  }

  // One input changes at a time: what several do at once depends on gate delays.
  it.each([1, 2, 3, 4, 5])('follows it however its gates are written (%i)', async (seed) => {
    const random = new RandomBits(seed);
    const row = [0, 1, 0, 0];
    const rows = Array.from({ length: 3000 }, () => {
      // Preset and clear are active in one row of eight.
      const input = [2, 3, 2, 3, random.next() % 2][random.next() % 5]!;
      row[input] = input < 2 && row[input] === 1 && random.next() % 4 > 0 ? 1 : 1 - row[input]!;
      return row.join('');
    });
    expect(await responseTo(flipFlop(shuffled(gates, seed)), rows)).toEqual(expected(rows));
  });
});

describe('the quad D flip-flop with common clear (74x175)', () => {
  const part = circuitFrom(`${cells}
    module part (input clk, clr_n, input [3:0] d, output [3:0] q, q_n);
      rising_d_clear bit[3:0] (q, clk, d, clr_n);
      not inverted[3:0] (q_n, q);
    endmodule`);
  const functionTable = `
    // clr_n d : q q_n, before the rising edge of the cycle
    0 1111 : 0000 1111
    0 1010 : 0000 1111
    1 1010 : 0000 1111
    1 0101 : 1010 0101
    1 1100 : 0101 1010
    0 1100 : 0000 1111 // clear does not wait for the clock
    1 0110 : 0000 1111
    1 0000 : 0110 1001`;

  it('follows its function table', () => expectCourse(part, functionTable));

  it('follows it from an unknown power-up', () =>
    expectCourse(
      part,
      `1 xxxx : xxxx xxxx\n${functionTable}\n1 x10x : 0000 1111\n1 0000 : x10x x01x`,
      {
        threeValued: true,
      },
    ));
});

describe('the JK flip-flop on the falling edge', () => {
  it('with clear alone follows its function table (74x73)', () =>
    expectCourse(
      circuitFrom(`${cells}
        module part (input clk, clr_n, j, k, output q, q_n);
          not (clr, clr_n), (q_n, q);
          falling_jk ff (q, clk, j, k, 1'b0, clr);
        endmodule`),
      `// clr_n j k : q q_n, before the falling edge of the cycle
      0 1 1 : 0 1
      0 1 0 : 0 1
      1 0 0 : 0 1
      1 1 0 : 0 1
      1 0 0 : 1 0 // set
      1 1 0 : 1 0 // held
      1 0 1 : 1 0
      1 0 1 : 0 1 // reset
      1 1 1 : 0 1
      1 1 1 : 1 0 // toggled
      1 1 1 : 0 1
      1 0 0 : 1 0
      0 0 0 : 0 1`,
    ));

  // The outputs are high together while preset and clear are active together.
  const withPreset = `${cells}
    module part (input clk, pre_n, clr_n, j, k, output q, q_n);
      not (clr, clr_n), (pre, pre_n), (held_n, held);
      falling_jk ff (held, clk, j, k, pre, clr);
      or (q, held, pre);
      or (q_n, held_n, clr);
    endmodule`;

  it('with preset and clear follows its function table (74x112)', () =>
    expectCourse(
      circuitFrom(withPreset),
      `// pre_n clr_n j k : q q_n, before the falling edge of the cycle
      0 1 0 1 : 1 0
      1 0 1 0 : 0 1
      0 0 1 1 : 1 1
      1 0 1 1 : 0 1
      1 1 1 1 : 0 1
      1 1 0 0 : 1 0
      1 1 0 1 : 1 0
      1 1 1 0 : 0 1
      1 1 1 1 : 1 0
      1 1 1 1 : 0 1
      0 1 0 1 : 1 0
      1 1 0 1 : 1 0
      1 1 0 0 : 0 1`,
    ));

  it('toggles as a T flip-flop where j and k are one input', async () => {
    const joined = `${withPreset}
      module t_flip_flop (input clk, pre_n, clr_n, t, output q, q_n);
        part ff (clk, pre_n, clr_n, t, t, q, q_n);
      endmodule`;
    const made = `${cells}
      module t_flip_flop (input clk, pre_n, clr_n, t, output q, q_n);
        xor (d, q, t);
        not (clk_n, clk), (q_n, q);
        and (both, pre_n, clr_n);
        rising_d_clear ff (q, clk_n, d, clr_n);
      endmodule`;
    const random = new RandomBits(3);
    const toggles = Array.from({ length: 500 }, () => random.next() & 1);
    const rows = ['1 0 0', ...toggles.map((t) => `1 1 ${t}`)];
    let q = 0;
    const expected = toggles.map((t) => {
      const now = q;
      q ^= t;
      return `${now} ${1 - now}`;
    });
    for (const text of [joined, made]) {
      expect((await responseTo(circuitFrom(text), rows)).slice(1)).toEqual(expected);
    }
  });
});

describe('the master-slave JK flip-flop of eight NAND gates (7472 kind, without preset)', () => {
  const gates = [
    'nand (s, j, q_n, clk);',
    'nand (r, k, q, clk);',
    'nand (m, s, m_n);',
    'nand (m_n, r, m, clr_n);',
    'nand (s2, m, clk_n);',
    'nand (r2, m_n, clk_n);',
    'nand (q, s2, q_n);',
    'nand (q_n, r2, q, clr_n);',
  ];
  const flipFlop = (order: readonly string[]) =>
    circuitFrom(`module part (input clr_n, clk, j, k, output q, q_n);
      wire s, r, m, m_n, s2, r2; not (clk_n, clk); ${order.join('\n')} endmodule`);

  const functionTable = `
    // clr_n clk j k : q q_n
    0 0 0 0 : 0 1
    1 0 0 0 : 0 1
    1 1 0 0 : 0 1
    1 0 0 0 : 0 1
    1 0 1 0 : 0 1
    1 1 1 0 : 0 1 // the master takes it while the clock is high
    1 0 1 0 : 1 0 // and the slave when it falls
    1 0 0 0 : 1 0
    1 1 0 0 : 1 0
    1 0 0 0 : 1 0
    1 0 0 1 : 1 0
    1 1 0 1 : 1 0
    1 0 0 1 : 0 1
    1 0 1 1 : 0 1
    1 1 1 1 : 0 1
    1 0 1 1 : 1 0 // toggles, once a pulse
    1 1 1 1 : 1 0
    1 0 1 1 : 0 1
    1 0 0 0 : 0 1
    1 1 0 0 : 0 1
    1 1 1 0 : 0 1 // a pulse of j while the clock is high
    1 1 0 0 : 0 1
    1 0 0 0 : 1 0 // is caught
    1 1 0 0 : 1 0
    1 1 0 1 : 1 0
    1 1 0 0 : 1 0
    1 0 0 0 : 0 1`;

  it('follows its function table', () => expectCourse(flipFlop(gates), functionTable));

  it.each([1, 2, 3])('follows it however its gates are written (%i)', (seed) =>
    expectCourse(flipFlop(shuffled(gates, seed)), functionTable),
  );

  it('follows it from an unknown power-up once cleared', () =>
    expectCourse(flipFlop(gates), `1 0 1 0 : x x\n${functionTable}`, { threeValued: true }));
});
