import { describe, expect, it } from 'vitest';
import type { ElementReport, SettleReport } from '../../../compiler/settle/settleReport.js';
import { reportText } from '../../../compiler/settle/text/reportText.js';

const known = (name: string, knownAfter: number): ElementReport => ({
  ...{ name, kind: 'register', verdict: 'known', knownAfter, agreedAfter: knownAfter, value: 0 },
});
const agreed = (name: string, agreedAfter: number): ElementReport => ({
  ...{ name, kind: 'register', verdict: 'agreed', agreedAfter, value: 0 },
});
const differing = (name: string, value: number, other: number, after = 10): ElementReport => ({
  ...{ name, kind: 'register', verdict: 'powerUp' },
  witness: { lanes: [0, other], values: [value, 1 - value], after },
});

/** A report on some elements, from which the rest is made up. */
function reportOn(elements: ElementReport[], more: Partial<SettleReport> = {}): SettleReport {
  const count = (verdict: string) => elements.filter((each) => each.verdict === verdict).length;
  return {
    circuit: 'chip',
    cycles: 10,
    stimulusCycles: 6,
    lanes: 128,
    seed: '0',
    registers: elements.length,
    latches: 0,
    loopNets: 0,
    counts: {
      known: count('known'),
      agreed: count('agreed'),
      powerUp: count('powerUp'),
      undecided: count('undecided'),
    },
    unknown: { unchangedAfter: 3, steps: [[0, 1]], held: { kind: 'still', after: 4 } },
    differing: { unchangedAfter: 2, steps: [[0, 1]], held: { kind: 'still', after: 5 } },
    elements,
    faults: [],
    powerUps: [],
    notes: [],
    ...more,
  };
}

const linesOf = (report: SettleReport): string[] => reportText(report, 'run it').split('\n');

describe('a report as text', () => {
  it('has the counts first, and then elements by verdict and cycle, with vectors folded', () => {
    const report = reportOn(
      [
        known('q[1]', 1),
        known('q[0]', 1),
        known('s[0]', 1),
        known('s[1]', 3),
        agreed('even', 2),
        differing('keep[1]', 1, 3),
        differing('keep[0]', 0, 5),
        differing('lost', 0, 4),
      ],
      {
        latches: 1,
        powerUps: [
          { lane: 0, seed: '7', state: '0' },
          { lane: 3, seed: '10', state: '1' },
        ],
      },
    );
    expect(linesOf(report)).toEqual([
      'chip: 8 registers, 1 latch; from unknown and from 128 random power-ups',
      '6 cycles of stimulus, then 4 with the inputs held',
      '',
      'known              4   after at most 3 cycles',
      'pessimistic x      1   x, though all lanes agree after at most 2 cycles',
      'power-up decides   3   different in some lanes',
      '',
      'unknown bits       no change after 3 cycles',
      'differing bits     no change after 2 cycles',
      'inputs held        nothing moves after 5 cycles',
      '',
      'power-up decides',
      // Bit 0 differs in lane 5 first, so that it is the same in lanes 0 and 3.
      '  keep[1:0]   0x2 in lane 0, 0x0 in lane 3',
      '  lost        0 in lane 0, 1 in lane 4',
      '',
      'pessimistic x',
      '  after 2   even',
      '',
      'known',
      '  after 1     q[1:0]',
      '  after 1-3   s[1:0]',
      '',
      'lane 3 again: run it 10',
    ]);
  });

  it('tells of bits that differed last before the end, and of wide vectors in how many bits', () => {
    const wide = Array.from({ length: 65 }, (_, i) => differing(`w[${i}]`, 0, i < 20 ? 1 : 2));
    const lines = linesOf(reportOn([...wide, differing('comes', 1, 2, 9)]));
    expect(lines).toContain('  w[64:0]   20 bits differ in lanes 0 and 1');
    expect(lines).toContain('  comes     1 in lane 0, 0 in lane 2 after 9 cycles');
  });

  it('says how all goes on with the inputs held', () => {
    const held = (unknown: object, lanes: object, more: Partial<SettleReport> = {}) =>
      linesOf(
        reportOn([known('q', 0)], {
          unknown: { unchangedAfter: 0, steps: [[0, 0]], ...unknown },
          differing: { unchangedAfter: 0, steps: [[0, 0]], ...lanes },
          ...more,
        }),
      ).slice(5, 9);
    const turns = { held: { kind: 'repeats', after: 2, period: 3 } };
    const still = { held: { kind: 'still', after: 4 } };
    expect(held(turns, turns)).toContain('inputs held        states come again every 3 cycles');
    expect(held({}, {})).toContain('inputs held        no state came again in 4 cycles');
    expect(held(still, turns).slice(2)).toEqual([
      'inputs held        three values: nothing moves after 4 cycles',
      '                   lanes: states come again every 3 cycles',
    ]);
    expect(held({}, {}, { cycles: 6 }).join()).not.toContain('held');
    expect(held({}, { unchangedAfter: 10 })).toContain(
      'differing bits     change in the last cycle still',
    );
  });

  it('says for how long it was run', () => {
    const second = (cycles: number, stimulusCycles: number) =>
      linesOf(reportOn([known('q', 0)], { cycles, stimulusCycles }))[1];
    expect(second(2000, 2000)).toBe('2,000 cycles of stimulus');
    expect(second(1, 0)).toBe('1 cycle with the inputs held');
  });

  it('names lanes that ended, and notes', () => {
    const fault = { cycle: 2, message: 'a loop does not settle', place: 'chip.v:3:1' };
    const faults = Array.from({ length: 5 }, (_, i) => ({ ...fault, lane: i, seed: `${i + 9}` }));
    const open: ElementReport = { name: 'r', kind: 'loop', verdict: 'undecided' };
    const text = reportText(reportOn([open], { faults, notes: ['all is held'] }), 'run it');
    expect(text).toContain(
      '\n5 of 128 lanes ended, for a cycle had no result:\n' +
        '  chip.v:3:1: lane 0 (seed 9), cycle 2: a loop does not settle\n',
    );
    expect(text).toContain('\n  and 2 more\nnote: all is held\n');
    expect(text).toContain('\nundecided\n  r');
  });

  it('stays within some forty rows and 80 columns', () => {
    const many = (make: (name: string, i: number) => ElementReport) =>
      Array.from({ length: 3000 }, (_, i) => make(`register_${i}`, i));
    const lines = linesOf(
      reportOn([
        ...many((name, i) => known(name, i % 100)),
        ...many((name, i) => agreed(`a_${name}`, i)),
        ...many((name, i) => differing(`d_${name}`, 0, 1 + (i % 9))),
      ]),
    );
    expect(lines.length).toBeLessThan(55);
    expect(Math.max(...lines.map((line) => line.length))).toBeLessThanOrEqual(80);
    expect(lines).toContain('  and 2,985 more');
  });

  it('says so where there is no state', () => {
    expect(reportText(reportOn([]), 'run it')).toBe('chip: no state, so nothing to settle');
  });
});
