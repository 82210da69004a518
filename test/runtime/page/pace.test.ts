import { describe, expect, it } from 'vitest';
import { Pace } from '../../../runtime/page/pace.js';

/** Lets frames come one after another; returns the cycles that went into each. */
function frames(pace: Pace, count: number, passed: number, cycleMs: number): number[] {
  return Array.from({ length: count }, () => {
    pace.frame(passed);
    return pace.take(cycleMs);
  });
}

describe('the pace of free running', () => {
  it('fills at most half a frame at 60 frames a second, whatever a cycle costs', () => {
    for (const cycleMs of [0.0001, 0.003, 0.05, 0.7, 4, 8]) {
      for (const cycles of frames(new Pace(), 50, 1000 / 60, cycleMs)) {
        expect(cycles * cycleMs).toBeLessThanOrEqual(1000 / 60 / 2);
        expect((cycles + 1) * cycleMs).toBeGreaterThan(2);
      }
    }
  });

  it('runs a cycle a frame where even one takes too long', () => {
    expect(frames(new Pace(), 3, 1000 / 60, 50)).toEqual([1, 1, 1]);
  });

  it('does less where frames come late, and more again when they are in time', () => {
    const pace = new Pace();
    const late = frames(pace, 40, 40, 0.01);
    expect(late).toEqual([...late].sort((p, q) => q - p));
    expect(late.at(-1)).toBe(200);
    const inTime = frames(pace, 100, 1000 / 60, 0.01);
    expect(inTime).toEqual([...inTime].sort((p, q) => p - q));
    expect(inTime.at(-1)).toBe(800);
  });
});

describe('the pace at a rate', () => {
  it.each([1, 5, 20, 60, 1000, 100_000])('passes %i cycles in a second', (rate) => {
    const pace = new Pace();
    pace.rate = rate;
    const passed = frames(pace, 600, 1000 / 60, 0.000_01).reduce((sum, cycles) => sum + cycles);
    expect(Math.abs(passed - 10 * rate)).toBeLessThanOrEqual(1);
  });

  it('makes up neither for a long pause nor for what there was no time for', () => {
    const pace = new Pace();
    pace.rate = 1000;
    expect(frames(pace, 1, 60_000, 0.000_01)).toEqual([100]);
    pace.rate = 1e6;
    expect(frames(pace, 1, 1000 / 60, 0.01)[0]).toBeLessThanOrEqual(800);
    pace.rate = 60;
    expect(frames(pace, 1, 1000 / 60, 0.01)[0]).toBeLessThanOrEqual(2);
  });
});
