import { describe, expect, it } from 'vitest';
import { Allowance } from '../../../runtime/table/allowance.js';

/** Runs cycles of which a share is known; returns the part of cycles that made entries. */
function partMade(known: (cycle: number) => boolean, cycles: number): number {
  const allowance = new Allowance();
  let made = 0;
  for (let cycle = 0; cycle < cycles; ) {
    if (allowance.rest > 0) {
      cycle += allowance.rest;
      allowance.pass(allowance.rest);
    } else if (known(cycle++)) {
      allowance.earn(1);
    } else {
      made++;
      allowance.spend();
    }
  }
  return made / cycles;
}

describe('Allowance', () => {
  it('lets a machine that never repeats make few entries', () => {
    expect(partMade(() => false, 20_000_000)).toBeLessThan(1 / 400);
    expect(partMade(() => false, 20_000_000)).toBeGreaterThan(1 / 600);
  });

  it('never stops a machine of which few cycles are new', () => {
    expect(partMade((cycle) => cycle % 100 !== 0, 1_000_000)).toBeCloseTo(1 / 100, 6);
  });

  it('comes back to the table after a rest', () => {
    const allowance = new Allowance();
    while (allowance.rest === 0) allowance.spend();
    allowance.pass(allowance.rest - 1);
    expect(allowance.rest).toBe(1);
    allowance.pass(1);
    expect(allowance.rest).toBe(0);
    allowance.earn(1_000_000);
    allowance.spend();
    expect(allowance.rest).toBe(0);
  });
});
