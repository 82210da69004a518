import { describe, expect, it } from 'vitest';
import { circuitFrom, responseTo } from '../sequential/courses.js';

const values = ['0', '1', 'x'] as const;
const pairs = values.flatMap((a) => values.map((b) => a + b));
const options = { threeValued: true };

describe('gates with unknown inputs, read from Verilog', () => {
  // IEEE 1364-2005, tables 7-3 and 7-4, without the rows and columns of z, which equal those of x:
  // first input 0, 1, x; in each group the second input 0, 1, x. From memory.
  it.each([
    ['and', '000 01x 0xx'],
    ['nand', '111 10x 1xx'],
    ['or', '01x 111 x1x'],
    ['nor', '10x 000 x0x'],
    ['xor', '01x 10x xxx'],
    ['xnor', '10x 01x xxx'],
  ])('follow the table of %s', async (gate, table) => {
    const circuit = circuitFrom(`module t (input a, b, output y); ${gate} (y, a, b); endmodule`);
    const response = await responseTo(circuit, pairs, options);
    expect(response.join('')).toBe(table.replaceAll(' ', ''));
  });

  it('of many inputs do as gates of two in a row', async () => {
    const gates = ['and', 'nand', 'or', 'nor', 'xor', 'xnor'] as const;
    const names = gates.map((gate) => `wide_${gate}, two_${gate}`).join(', ');
    const pair = { and: 'and', nand: 'and', or: 'or', nor: 'or', xor: 'xor', xnor: 'xor' };
    const circuit = circuitFrom(`module t (input a, b, c, output ${names});
      ${gates
        .map(
          (gate) => `${gate} (wide_${gate}, a, b, c);
            ${pair[gate]} (first_${gate}, a, b); ${gate} (two_${gate}, first_${gate}, c);`,
        )
        .join('\n')} endmodule`);
    const rows = pairs.flatMap((row) => values.map((c) => row + c));
    for (const row of await responseTo(circuit, rows, options)) {
      const bits = row.split(' ');
      expect(bits.filter((_, i) => i % 2 === 0)).toEqual(bits.filter((_, i) => i % 2 === 1));
    }
  });

  it('follow the tables of buf and not', async () => {
    const circuit = circuitFrom(
      'module t (input a, output y, y2, n, n2); buf (y, y2, a); not (n, n2, a); endmodule',
    );
    expect(await responseTo(circuit, values, options)).toEqual(['0 0 1 1', '1 1 0 0', 'x x x x']);
  });

  // Table 7-5; a z, L or H at an input reads as x. Data 0, 1, x; in each group control 0, 1, x.
  it.each([
    ['bufif0', '0xx 1xx xxx'],
    ['bufif1', 'x0x x1x xxx'],
    ['notif0', '1xx 0xx xxx'],
    ['notif1', 'x1x x0x xxx'],
  ])('follow the table of %s', async (gate, table) => {
    const circuit = circuitFrom(`module t (input d, c, output y);
      ${gate} (bus, d, c); buf (y, bus); endmodule`);
    const response = await responseTo(circuit, pairs, options);
    expect(response.join('')).toBe(table.replaceAll(' ', ''));
  });

  // Clauses 7.10 and 7.11: H against a pullup is 1, L against it may be either.
  it('that may be off leave a pulled net known where they agree with its pull', async () => {
    const circuit = circuitFrom(`module t (input d, c, output up, down);
      bufif1 (up, d, c); pullup (up); bufif1 (down, d, c); pulldown (down); endmodule`);
    const table = '1 0, 0 0, x 0, 1 0, 1 1, 1 x, 1 0, x x, x x';
    expect((await responseTo(circuit, pairs, options)).join(', ')).toBe(table);
  });

  // Clause 5.1.13.
  it('follow the table of the conditional operator', async () => {
    const circuit = circuitFrom(
      'module t (input s, a, b, output y); assign y = s ? a : b; endmodule',
    );
    const rows = values.flatMap((s) => pairs.map((pair) => s + pair));
    const response = await responseTo(circuit, rows, options);
    expect(response.join('')).toBe(['01x01x01x', '000111xxx', '0xxx1xxxx'].join(''));
  });
});
