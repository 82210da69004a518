import { describe, expect, it } from 'vitest';
import type { Step } from '../../../compiler/settle/memberCourse.js';
import { countTicks, cycleScale } from '../../../compiler/settle/picture/scales.js';
import { settlePicture } from '../../../compiler/settle/picture/settlePicture.js';
import type { SettleReport } from '../../../compiler/settle/settleReport.js';

function pictureOf(
  cycles: number,
  unknown: readonly Step[],
  differing: readonly Step[],
  more: Partial<SettleReport> = {},
): string {
  const course = (steps: readonly Step[]) => ({ unchangedAfter: steps.at(-1)![0], steps });
  return settlePicture({
    ...{ circuit: 'chip', cycles, stimulusCycles: 4, lanes: 128, seed: '0' },
    ...{ registers: 20, latches: 0, loopNets: 0, faults: [], powerUps: [], notes: [] },
    counts: { known: 20, agreed: 0, powerUp: 0, undecided: 0 },
    elements: Array.from({ length: 20 }, (_, i) => ({
      ...{ name: `q${i}`, kind: 'register', verdict: 'known' },
    })),
    unknown: course(unknown),
    differing: course(differing),
    ...more,
  });
}

/** The corners of a line: pairs of numbers behind M, H and V. */
function cornersOf(picture: string, kind: string): number[][] {
  const path = new RegExp(`<path class="${kind} edge" d="([^"]*)"`).exec(picture)![1]!;
  let [x, y] = [0, 0];
  return Array.from(path.matchAll(/([MHV])([\d.]+)(?: ([\d.]+))?/g), ([, verb, one, two]) => {
    if (verb === 'M') [x, y] = [Number(one), Number(two)];
    else if (verb === 'H') x = Number(one);
    else y = Number(one);
    return [x, y];
  });
}

describe('the picture', () => {
  const steps: Step[] = [
    [0, 20],
    [2, 10],
    [6, 0],
  ];
  const picture = pictureOf(100, steps, [
    [0, 20],
    [1, 5],
  ]);

  it('is a staircase from the counts at power-up to those at the end', () => {
    // 20 to 0 bits stand from 118 down to 352, 0 to 9 cycles from 76 to 732.
    const at = (cycles: number) => Math.round((76 + (cycles / 9) * 656) * 100) / 100;
    expect(cornersOf(picture, 'unknown')).toEqual([
      [76, 118],
      [at(2), 118],
      [at(2), 235],
      [at(6), 235],
      [at(6), 352],
      [at(9), 352],
    ]);
    expect(cornersOf(picture, 'differing').map(([, y]) => y)).toEqual([118, 118, 293.5, 293.5]);
  });

  it('says in words what it shows, and where it is cut off', () => {
    expect(picture).toContain('role="img" aria-labelledby="settle-title settle-description"');
    expect(picture).toContain('<title id="settle-title">Unknown state of chip</title>');
    expect(picture).toMatch(/<desc [^>]*>Of 20 state bits, 20 at power-up and 0 after 100 cycles/);
    expect(picture).toContain('cycles done; no change from here to 100<');
    expect(picture).toContain('inputs held from here');
    expect(picture).toContain('20 → 5');
  });

  it('has colours for a light and for a dark ground, and no script', () => {
    expect(picture).toContain('@media (prefers-color-scheme: dark)');
    expect(picture).not.toContain('<script');
  });

  it('goes to the last cycle where something changes until then', () => {
    const whole = pictureOf(9, [...steps, [9, 3]], [[0, 0]], { stimulusCycles: 9 });
    expect(whole).not.toContain('from here');
    expect(cornersOf(whole, 'unknown').at(-1)![0]).toBe(732);
  });

  it('writes names out that are no plain text', () => {
    const odd = pictureOf(1, [[0, 0]], [[0, 0]], { circuit: 'a<b>&"c' });
    expect(odd).toContain('Unknown state of a&#60;b&#62;&#38;&#34;c');
    expect(odd).not.toContain('<b>');
  });

  it('has nothing to draw without cycles or without state', () => {
    const none = pictureOf(0, [[0, 0]], [[0, 0]], { stimulusCycles: 0, elements: [] });
    expect(none).not.toMatch(/NaN|Infinity|undefined/);
  });
});

describe('its scales', () => {
  it.each([1, 2, 8, 13, 64, 65, 300, 4096, 1_000_000])('hold %i cycles', (last) => {
    const { at, ticks, isLogarithmic } = cycleScale(last);
    expect([at(0), at(last)]).toEqual([0, 1]);
    expect(isLogarithmic).toBe(last > 64);
    expect(ticks[0]).toBe(0);
    expect(ticks.length).toBeLessThanOrEqual(13);
    expect(ticks.at(-1)).toBeLessThanOrEqual(last);
    ticks.slice(1).forEach((tick, i) => {
      const gap = (at(tick) - at(ticks[i]!)) * 656;
      const digits = `${tick}${ticks[i]}`.length / 2;
      expect(gap, `between ${ticks[i]} and ${tick}`).toBeGreaterThan(7 * digits);
    });
  });

  it.each([1, 2, 5, 6, 21, 99, 640])('hold counts of %i', (most) => {
    const ticks = countTicks(most);
    expect(ticks.at(-1)).toBeGreaterThanOrEqual(most);
    expect(ticks.at(-2)).toBeLessThan(most);
    expect(ticks.length).toBeLessThanOrEqual(6);
  });
});
