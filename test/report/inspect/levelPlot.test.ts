import { describe, expect, it } from 'vitest';
import { levelPlot } from '../../../compiler/report/inspect/levelPlot.js';
import type { Inspection } from '../../../compiler/report/inspection.js';
import { inspectNetlist, inspectSmall } from './reading.js';

const small = inspectSmall({
  inputs: ['clk', 'a'],
  outputs: ['q'],
  registers: { q: { clock: 'clk', data: 'n2' } },
  gates: { n1: 'not q', n2: 'and n1 a', n3: 'not a' },
});

const withCounts = (levels: number[], registerDepths: number[]): Inspection => ({
  ...small,
  ...{ levels, registerDepths, depth: levels.length - 1 },
});

/** Opening tags and their ends balance, and attributes are quoted. */
function expectWellFormed(svg: string): void {
  const open: string[] = [];
  for (const [, end, name, rest] of svg.matchAll(/<(\/?)([\w]+)((?:\s[\w-]+="[^"<]*")*\s*\/?)>/g)) {
    if (end === '/') expect(open.pop()).toBe(name);
    else if (!rest!.endsWith('/')) open.push(name!);
  }
  expect(open).toEqual([]);
  expect(svg.replace(/<[^<>]*>/g, '')).not.toMatch(/[<>]/);
}

describe('the level plot', () => {
  it('has a bar for each level, and for each depth between registers', () => {
    const svg = levelPlot(small);
    expectWellFormed(svg);
    const tips = Array.from(
      svg.matchAll(/<rect class="bar"[^>]*><title>(.*?)<\/title>/g),
      (m) => m[1],
    );
    expect(tips).toEqual([
      ...['1: 2 gates', '2: 1 gate'],
      ...['0: 0 registers', '1: 0 registers', '2: 1 register'],
    ]);
  });

  it('has a name and a description for those who do not see it', () => {
    const svg = levelPlot(small);
    expect(svg).toContain('role="img" aria-labelledby="plot-title plot-description"');
    expect(svg).toContain('<title id="plot-title">Levels of logic in small</title>');
    expect(svg).toContain(
      '<desc id="plot-description">3 gates on 2 levels; at most 2 gates between registers.</desc>',
    );
  });

  it('draws bars from the base line up, the highest within the scale', () => {
    const svg = levelPlot(withCounts([0, 5, 20, 1_000_000, 0], [3, 1]));
    const bars = Array.from(
      svg.matchAll(
        /<rect class="bar" x="([\d.]+)" y="([\d.]+)" width="([\d.]+)" height="([\d.]+)"/g,
      ),
      ([, ...numbers]) => numbers.map(Number),
    ) as [number, number, number, number][];
    const bottoms = bars.map(([, y, , height]) => Math.round(y + height));
    expect(new Set(bottoms.slice(0, 4)).size).toBe(1);
    expect(bars[0]![3]).toBe(1);
    expect(bars[2]![3]).toBeGreaterThan(100);
    expect(bars[2]![3]).toBeLessThanOrEqual(176);
    expect(bars[3]![3]).toBe(0);
  });

  it('takes levels together where there are many', () => {
    const svg = levelPlot(withCounts([0, ...new Array(5000).fill(7)], new Array(900).fill(2)));
    expectWellFormed(svg);
    expect(svg.match(/class="bar"/g)!.length).toBeLessThanOrEqual(2 * 48);
    expect(svg).toContain('<title>1-200: 1,400 gates</title>');
  });

  it('says so where there is nothing to draw', () => {
    const svg = levelPlot(inspectSmall({ inputs: ['a'], outputs: ['a'] }));
    expectWellFormed(svg);
    expect(svg).toContain('no gate has a level');
    expect(svg).toContain('no register leads to another');
  });

  it('keeps names of any characters as text, and holds no script', () => {
    const svg = levelPlot(
      inspectNetlist('module \\<script>&" (input a, output y); not (y, a); endmodule'),
    );
    expectWellFormed(svg);
    expect(svg).toContain('Levels of logic in &#60;script&#62;&#38;&#34;');
    expect(svg).not.toMatch(/<script|href|url\(|on\w+=/);
  });
});
