import { describe, expect, it } from 'vitest';
import { engineNames } from '../../compiler/engines.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

describe('the 64-bit counter', () => {
  // Arithmetic modulo 2^64.
  it.each(engineNames)('counts over from 2^64 - 3, on %s', async (name) => {
    const rows: PortValues[] = [
      { load: 1, data: 2n ** 64n - 3n, enable: 1 },
      { load: 0 },
      ...[{}, {}, {}, {}],
      { enable: 0 },
      { enable: 1, reset: 1 },
    ];
    const read = playValues(await poweredEngine(ownDesign('counter'), name), rows);
    const seen = rows.map((_, cycle) => [read('count', cycle), read('terminal', cycle)]);
    expect(seen).toEqual([
      [0n, 0n],
      [0xffff_ffff_ffff_fffdn, 0n],
      [0xffff_ffff_ffff_fffen, 0n],
      [0xffff_ffff_ffff_ffffn, 1n],
      [0n, 0n],
      [1n, 0n],
      [2n, 0n],
      // The reset is asynchronous: it shows in the cycle in which it comes.
      [0n, 0n],
    ]);
  });

  it.each(engineNames)('carries from each slice of 16 bits into the next, on %s', async (name) => {
    const engine = await poweredEngine(ownDesign('counter'), name);
    for (const bits of [16n, 32n, 48n]) {
      const data = 2n ** bits - 1n;
      const read = playValues(engine, [{ load: 1, data, enable: 0 }, { load: 0, enable: 1 }, {}]);
      expect([read('count', 1), read('count', 2)]).toEqual([data, data + 1n]);
    }
  });
});
