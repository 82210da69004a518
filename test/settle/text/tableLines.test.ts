import { describe, expect, it } from 'vitest';
import { tableLines } from '../../../compiler/settle/text/tableLines.js';

const row = (label: string, ...names: string[]) => ({
  label,
  cells: names.map((text) => ({ text, bits: 1 })),
});

describe('lines of a table', () => {
  it('have their labels in a column, and break between cells', () => {
    const rows = [row('after 1', 'alpha', 'beta', 'gamma'), row('after 12', 'delta')];
    expect(tableLines(rows, 26, 9)).toEqual([
      '  after 1    alpha, beta,',
      '             gamma',
      '  after 12   delta',
    ]);
  });

  it('need no column where there is no label', () => {
    expect(tableLines([row('', 'alpha', 'beta')], 40, 9)).toEqual(['  alpha, beta']);
  });

  it('keep a cell whole that is wider than the table', () => {
    expect(tableLines([row('q', 'a_long_name', 'b')], 10, 9)).toEqual([
      '  q   a_long_name,',
      '      b',
    ]);
  });

  it('say in the last one how many bits are left out', () => {
    const wide = { label: 'w', cells: [{ text: 'v[1999:0]', bits: 2000 }] };
    expect(tableLines([row('a', 'b'), row('c', 'd'), row('e', 'f'), wide], 40, 3)).toEqual([
      '  a   b',
      '  c   d',
      '  and 2,001 more',
    ]);
    expect(tableLines([row('a', 'bravo', 'charlie', 'delta')], 12, 2)).toEqual([
      '  a   bravo,',
      '  and 2 more',
    ]);
    expect(tableLines([row('a', 'b'), row('c', 'd')], 40, 2)).toEqual(['  a   b', '  c   d']);
  });

  it('let a label stick out that is far longer than others', () => {
    const long = 'x'.repeat(50);
    expect(tableLines([row(long, 'a'), row('b', 'c')], 80, 9)).toEqual([
      `  ${long}   a`,
      `  b${' '.repeat(35)}   c`,
    ]);
  });
});
