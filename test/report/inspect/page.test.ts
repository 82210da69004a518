import { describe, expect, it } from 'vitest';
import { inspectionPage } from '../../../compiler/report/inspect/page.js';
import { inspectNetlist, inspectSmall } from './reading.js';

/** An inverter chain of some length between two registers. */
const chain = (length: number) =>
  inspectSmall({
    inputs: ['clk', 'd'],
    outputs: ['q'],
    registers: { a: { clock: 'clk', data: 'q' }, q: { clock: 'clk', data: `n${length}` } },
    gates: Object.fromEntries(
      Array.from({ length }, (_, i) => [`n${i + 1}`, i === 0 ? 'not a' : `not n${i}`]),
    ),
  });

describe('the page', () => {
  it('tells each thing in a row of its own', () => {
    const text = inspectionPage(chain(3));
    const rows = text.split('\n').map((line) => line.trim().replace(/ {2,}/, ': '));
    expect(rows.slice(0, 12)).toEqual([
      'small',
      'inputs: 1 (1 bits): d',
      'outputs: 1 (1 bits): q',
      'clocks: clk (2 registers)',
      'gates: 3: 3 not',
      'registers: 2',
      'latches: 0',
      'state: 2 bits: none with set, reset or initial value',
      'loops: 0',
      'depth: 3 levels of gates',
      'deepest: a (register) > n1 (not) > n2 (not) > n3 (not) > q (register)',
      'fan-out: 2 clk, 2 q',
    ]);
    expect(rows).toContain('problems: 2');
    expect(text).toMatch(/^ {4}warning: 2 of 2 registers .* \[register-no-start\]$/m);
  });

  it('has a plot of at most twenty lines and eighty columns, whatever the depth', () => {
    for (const depth of [1, 16, 17, 999]) {
      const lines = inspectionPage(chain(depth)).split('\n');
      const start = lines.findIndex((line) => line.trim() === 'gates by level');
      const end = lines.findIndex((line) => line.trim().startsWith('problems'));
      expect(end - start).toBeGreaterThan(1);
      expect(end - start).toBeLessThanOrEqual(20);
      for (const line of lines.slice(0, end)) expect(line.length).toBeLessThanOrEqual(80);
    }
  });

  it('shortens a long path in the middle', () => {
    const text = inspectionPage(chain(100)).replace(/\s+/g, ' ');
    expect(text).toContain('n7 (not) > (86 more) > n94 (not)');
  });

  it('says how many ports, clocks, latches and kinds there are', () => {
    const ports = Array.from({ length: 30 }, (_, i) => `p${i}`);
    const text = inspectionPage(
      inspectSmall({
        inputs: ['clk', 'ena', ...ports],
        outputs: ['q', 'l'],
        latches: { l: { enable: 'clk', data: 'p1' } },
        registers: { q: { clock: 'g', data: 'p0', edge: 1, reset: 'p2' } },
        gates: { g: 'and clk ena' },
      }),
    ).replace(/\s+/g, ' ');
    expect(text).toContain('inputs 31 (31 bits): ena, p0,');
    expect(text).toContain('p10, and 19 more outputs');
    expect(text).toContain('clk (1 register: 1 gated; 1 on its falling edge; 1 latch)');
    expect(text).toContain('gated by ena');
    expect(text).toContain('state 2 bits: 1 with reset, 1 with none of these');
  });

  it('says that there is nothing where there is nothing', () => {
    const text = inspectionPage(inspectSmall({ inputs: [], outputs: [] }));
    expect(text).toBe(
      [
        'small',
        '  inputs     none',
        '  outputs    none',
        '  clocks     none',
        '  gates      0',
        '  registers  0',
        '  latches    0',
        '  state      none',
        '  loops      0',
        '  depth      0 levels of gates',
        '  problems   none found',
      ].join('\n'),
    );
  });

  it('stops after fifty problems', () => {
    const wires = Array.from({ length: 60 }, (_, i) => `w${i}`);
    const text = inspectionPage(
      inspectNetlist(
        `module t (output [59:0] y);\n${wires.map((w, i) => `wire ${w}; buf (y[${i}], ${w});`).join('\n')}\nendmodule`,
      ),
    );
    const problems = text.split('\n').filter((line) => /\[[a-z-]+\]$/.test(line));
    expect(problems).toHaveLength(50);
    expect(text).toMatch(/\n {4}and \d+ more; --json has all$/);
  });

  it('paints headings and severities where asked to', () => {
    const text = inspectionPage(chain(1), (part, kind) => `<${kind}>${part}</>`);
    expect(text).toContain('<heading>small</>');
    expect(text).toContain('<warning>warning</>: 2 of 2 registers');
    expect(inspectionPage(chain(1))).not.toContain('<');
  });
});
