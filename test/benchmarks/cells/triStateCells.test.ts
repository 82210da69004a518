import { describe, expect, test } from 'vitest';
import { triStateCells } from '../../../benchmarks/circuits/cells/physicalCells.js';
import { poweredEngine } from '../../support/ownCircuits.js';
import { playValues } from '../../support/portValues.js';
import { designWith, models } from './reading.js';

describe('the cells with three states', () => {
  test.each(models)('drive a bus in turn, as %s models', async (model) => {
    // On each bus one cell is enabled at 1 and the other at 0.
    const pairs = triStateCells.flatMap((high) =>
      triStateCells
        .filter(({ enable }) => high.enable === 'en' && enable === 'en_n')
        .map((low) => [high, low] as const),
    );
    const instances = pairs.map(
      ([high, low], i) => `
          ${high.name} high_${i} (.y(bus_${i}), .a(a), .en(s));
          ${low.name} low_${i} (.y(bus_${i}), .a(b), .en_n(s));`,
    );
    const ports = pairs.map((_, i) => `output bus_${i}`);
    const netlist = `module bench (input a, b, s, ${ports.join(', ')});
        ${instances.join('')}
      endmodule`;
    const rows = Array.from({ length: 8 }, (_, i) => ({ a: i & 1, b: (i >> 1) & 1, s: i >> 2 }));
    const read = playValues(await poweredEngine(designWith(model, netlist), 'reference'), rows);
    expect(pairs).toHaveLength(4);
    for (const [i, [high, low]] of pairs.entries()) {
      const expected = rows.map(({ a, b, s }) => {
        const { family } = s === 1 ? high : low;
        const data = s === 1 ? a : b;
        return BigInt(family.includes('inverter') ? 1 - data : data);
      });
      expect(rows.map((_, cycle) => read(`bus_${i}`, cycle))).toEqual(expected);
    }
  });
});
