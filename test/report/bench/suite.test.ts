import { describe, expect, it } from 'vitest';
import { benchPicture } from '../../../compiler/report/bench/benchPicture.js';
import { benchSuite, speedOver, usedBy } from '../../../compiler/report/bench/suite.js';
import { suiteText } from '../../../compiler/report/bench/suiteText.js';
import { benchResult } from '../../support/benchResults.js';

const machine = { processor: 'A & B <1>', cores: 2, node: 'v20', load: 0.5 };
const large = benchResult('large', { native: 40, nativeMarch: 20 });
const small = benchResult('small', { native: 10, nativeMarch: 20, table: 2 });
const uncompiled = { ...benchResult('un<compiled', {}), notes: ['no compiler'] };

describe('a suite', () => {
  it('has the geometric means of speeds over native C', () => {
    // 4 and 1; 4 and 5 as run; 2 and 2.
    const { means } = benchSuite(machine, [large, small, uncompiled]);
    expect(means.straightLine).toBeCloseTo(2, 3);
    expect(means.asRun).toBeCloseTo(Math.sqrt(20), 3);
    expect(means.straightLineMarch).toBeCloseTo(2, 3);
    expect(benchSuite(machine, [uncompiled]).means).toEqual({});
  });

  it('knows what a run uses, and ratios of what was measured', () => {
    expect([large, small].map(usedBy)).toEqual(['wasm', 'table']);
    expect(speedOver(small, 'native', 'table')).toBe(5);
    expect(speedOver(large, 'native', 'table')).toBeUndefined();
  });

  it('is a line a circuit as text', () => {
    const withAnswer = { ...large, firstAnswer: { coldMs: 321, cachedMs: 123 } };
    const lines = suiteText(benchSuite(machine, [withAnswer, small, uncompiled])).split('\n');
    const cells = (line: string): string[] => line.split(/ {2,}/);
    const [head, ...rows] = lines.slice(0, 4).map(cells);
    expect(new Set(rows.map((row) => row.length))).toEqual(new Set([head!.length]));
    const cell = (row: number, heading: string) => rows[row]![head!.indexOf(heading)];
    expect(cell(0, 'native')).toBe('4.00');
    expect(cell(0, 'table best')).toBe('-');
    expect(cell(0, 'first ms')).toBe('321.0');
    expect(cell(1, 'native/table')).toBe('5.00');
    expect(cell(1, 'cached ms')).toBe('-');
    expect(cell(2, 'native')).toBe('-');
    expect(lines).toContain('geometric mean of native over wasm: 2.00');
    expect(lines).toContain('note: no compiler');
  });
});

describe('a picture of a suite', () => {
  it('shows each circuit that was compiled natively, with its speed as run', () => {
    const picture = benchPicture(benchSuite(machine, [large, small, uncompiled]));
    expect(picture).toContain('>large</text>');
    expect(picture).toContain('>4 times</text>');
    expect(picture).toContain('>5 times</text>');
    expect(picture).not.toContain('compiled</text>');
    expect(picture).toContain('A &#38; B &#60;1&#62;');
    expect(picture.match(/class="bar"/g)).toHaveLength(2);
  });

  it('is well-formed, with every mark inside', () => {
    const picture = benchPicture(benchSuite(machine, [large, small]));
    const width = Number(/viewBox="0 0 (\d+) /.exec(picture)![1]);
    const open: string[] = [];
    for (const [, end, name, , empty] of picture.matchAll(/<(\/?)([a-z]+)([^>]*?)(\/?)>/g)) {
      if (end === '/') expect(open.pop()).toBe(name);
      else if (empty !== '/') open.push(name!);
    }
    expect(open).toEqual([]);
    const places = [...picture.matchAll(/ (?:x|cx)="([\d.-]+)"/g)].map(([, x]) => Number(x));
    expect(places.length).toBeGreaterThan(10);
    expect(places.every((x) => x >= 0 && x <= width)).toBe(true);
  });

  it('is refused where nothing was compiled natively', () => {
    expect(() => benchPicture(benchSuite(machine, [uncompiled]))).toThrow(RangeError);
  });
});
