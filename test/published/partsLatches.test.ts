import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { binary, circuitFrom, expectCourse, responseTo } from '../sequential/courses.js';

// Characteristic tables as in textbooks (M. M. Mano, "Digital Design"; J. F. Wakerly, "Digital
// Design: Principles and Practices") and, for the 74x75, Texas Instruments, "The TTL Data Book for
// Design Engineers", 1973; written down from memory.

describe('the latch of two NAND gates', () => {
  const latch = circuitFrom(`module part (input s_n, r_n, output q, q_n);
    nand (q, s_n, q_n), (q_n, r_n, q); endmodule`);
  const table = `
    // s_n r_n : q q_n
    0 1 : 1 0
    1 1 : 1 0
    1 0 : 0 1
    1 1 : 0 1
    0 0 : 1 1 // invalid: both outputs high
    0 1 : 1 0
    0 0 : 1 1
    1 0 : 0 1
    1 1 : 0 1`;

  it('follows its characteristic table', () => expectCourse(latch, table));
  it('follows it from an unknown power-up', () =>
    expectCourse(latch, `1 1 : x x\nx 1 : x x\n${table}`, { threeValued: true }));
  it('holds 0 where a set may come, for what it may have become: unknown', () =>
    expectCourse(latch, '1 0 : 0 1\n1 1 : 0 1\nx 1 : x x\n1 1 : x x\n0 1 : 1 0\nx 1 : 1 0', {
      threeValued: true,
    }));

  // Which one, nothing but the order of the gates decides; it is one of the two stable states.
  it('comes to rest when both inputs are released together', async () => {
    const [, released, later] = await responseTo(latch, ['0 0', '1 1', '1 1']);
    expect(['0 1', '1 0']).toContain(released);
    expect(later).toBe(released);
  });
});

describe('the latch of two NOR gates', () => {
  const latch = circuitFrom(`module part (input s, r, output q, q_n);
    nor (q, r, q_n), (q_n, s, q); endmodule`);
  const table = `
    // s r : q q_n
    1 0 : 1 0
    0 0 : 1 0
    0 1 : 0 1
    0 0 : 0 1
    1 1 : 0 0 // invalid: both outputs low
    1 0 : 1 0
    1 1 : 0 0
    0 1 : 0 1
    0 0 : 0 1`;

  it('follows its characteristic table', () => expectCourse(latch, table));
  it('follows it from an unknown power-up', () =>
    expectCourse(latch, `0 0 : x x\n${table}`, { threeValued: true }));
  it('comes to rest when both inputs are released together', async () => {
    const [, released, later] = await responseTo(latch, ['1 1', '0 0', '0 0']);
    expect(['0 1', '1 0']).toContain(released);
    expect(later).toBe(released);
  });
});

describe('the latch in which one input wins', () => {
  it('is set-dominant as q = s + r´ q', () =>
    expectCourse(
      circuitFrom(`module part (input s, r, output q);
        not (r_n, r); and (kept, r_n, q); or (q, s, kept); endmodule`),
      '0 1 : 0\n1 0 : 1\n0 0 : 1\n1 1 : 1\n0 1 : 0\n0 0 : 0\n1 1 : 1\n1 0 : 1\n0 0 : 1',
    ));
  it('is reset-dominant as q = r´ (s + q)', () =>
    expectCourse(
      circuitFrom(`module part (input s, r, output q);
        not (r_n, r); or (kept, s, q); and (q, r_n, kept); endmodule`),
      '0 1 : 0\n1 0 : 1\n0 0 : 1\n1 1 : 0\n0 1 : 0\n0 0 : 0\n1 0 : 1\n1 1 : 0\n1 0 : 1',
    ));
  it('is known under the winning input alone', async () => {
    const text = (gates: string) =>
      circuitFrom(`module part (input s, r, output q);
      not (r_n, r); ${gates} endmodule`);
    const set = text('and (kept, r_n, q); or (q, s, kept);');
    const reset = text('or (kept, s, q); and (q, r_n, kept);');
    await expectCourse(set, '0 0 : x\n1 x : 1\n0 x : x\n0 1 : 0', { threeValued: true });
    await expectCourse(reset, '0 0 : x\nx 1 : 0\nx 0 : x\n1 0 : 1', { threeValued: true });
  });
});

describe('the gated D latch', () => {
  const gated = {
    'of four NAND gates and an inverter': `
      not (d_n, d); nand (s_n, d, g), (r_n, d_n, g); nand (q, s_n, q_n), (q_n, r_n, q);`,
    // The second gate takes the first one's output for the inverse of d.
    'of four NAND gates': `
      nand (s_n, d, g), (r_n, s_n, g); nand (q, s_n, q_n), (q_n, r_n, q);`,
    'of AND and NOR gates (74x75)': `
      not (g_n, g), (q, q_n); and (a, d, g), (b, q, g_n); nor (q_n, a, b);`,
    'of NAND gates as a multiplexer': `
      not (g_n, g), (q_n, q); nand (a, d, g), (b, q, g_n); nand (q, a, b);`,
    // One assignment is one function: its terms do not change one after the other.
    'of one expression': 'assign q = (g & d) | (~g & q); assign q_n = ~q;',
    'of a multiplexer': 'assign q = g ? d : q; assign q_n = ~q;',
  };

  const gates = Object.entries(gated).map(([name, text]) => ({
    name,
    latch: circuitFrom(`module part (input g, d, output q, q_n); ${text} endmodule`),
  }));

  it.each(gates)('passes while it is enabled and holds otherwise: $name', ({ latch }) =>
    expectCourse(
      latch,
      `// g d : q q_n
      1 0 : 0 1
      1 1 : 1 0
      1 0 : 0 1
      0 0 : 0 1
      0 1 : 0 1
      1 1 : 1 0
      0 1 : 1 0
      0 0 : 1 0
      1 0 : 0 1`,
    ),
  );

  it.each(gates)('is unknown until it is enabled: $name', ({ latch }) =>
    expectCourse(latch, '0 0 : x x\n0 1 : x x\n1 1 : 1 0\n0 x : 1 0\n1 x : x x\n0 0 : x x', {
      threeValued: true,
    }),
  );

  it.each(gates)(
    'does as the last data while enabled over a random course: $name',
    async ({ latch }) => {
      const random = new RandomBits(75);
      const rows = ['10'];
      // Never both at once: the data must be there before the enable goes.
      for (let i = 0; i < 2000; i++) {
        const row = Array.from(rows[i]!, Number);
        const input = random.next() & 1;
        row[input] = 1 - row[input]!;
        rows.push(row.join(''));
      }
      let q = '0';
      const expected = rows.map(([enable, data]) => {
        if (enable === '1') q = data!;
        return `${q} ${1 - Number(q)}`;
      });
      expect(await responseTo(latch, rows)).toEqual(expected);
    },
  );
});

describe('the Muller C element', () => {
  // D. E. Muller, W. S. Bartky, "A theory of asynchronous circuits", 1959; as the majority of both
  // inputs and its own output.
  const forms = {
    majority: 'and (ab, a, b), (ac, a, c), (bc, b, c); or (c, ab, ac, bc);',
    factored: 'and (ab, a, b); or (either, a, b); and (kept, c, either); or (c, ab, kept);',
    'set and reset': 'nand (s_n, a, b); or (r_n, a, b); nand (c, s_n, c_n), (c_n, r_n, c);',
  };
  const elements = Object.entries(forms).map(([name, text]) => ({
    name,
    element: circuitFrom(`module part (input a, b, output c); ${text} endmodule`),
  }));

  it.each(elements)('changes when both inputs agree: $name', ({ element }) =>
    expectCourse(element, '0 0 : 0\n0 1 : 0\n1 1 : 1\n0 1 : 1\n1 0 : 1\n0 0 : 0\n1 0 : 0\n1 1 : 1'),
  );

  it.each(elements)('holds over a random course: $name', async ({ element }) => {
    const random = new RandomBits(1959);
    const rows = ['00', ...Array.from({ length: 1000 }, () => binary(random.next() & 3, 2))];
    let c = '0';
    const expected = rows.map(([a, b]) => {
      if (a === b) c = a!;
      return c;
    });
    expect(await responseTo(element, rows)).toEqual(expected);
  });

  it.each(elements)('knows what both values of an input lead to: $name', ({ element }) =>
    expectCourse(element, '0 1 : x\nx 0 : x\n0 0 : 0\nx 0 : 0\nx 1 : x\n1 1 : 1\n1 x : 1', {
      threeValued: true,
    }),
  );
});
