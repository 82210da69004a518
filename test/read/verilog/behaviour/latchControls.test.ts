import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Priority } from '../../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../../compiler/circuit/clockPorts.js';
import { NO_NET } from '../../../../compiler/circuit/ids.js';
import { circuitOf } from '../elaborate/reading.js';
import { bench } from './bench.js';

type Pin = 'enable' | 'data' | 'set' | 'reset';

/** The pins that the one latch of a process has. */
function pinsOf(body: string): string {
  const { circuit, diagnostics } = bench(`input en, d, r, s, t; reg q; ${body}`);
  expect(diagnostics).toEqual([]);
  const { latches } = circuit;
  expect(latches.count).toBe(1);
  const pins = (['enable', 'data', 'set', 'reset'] as const).filter(
    (pin: Pin) => latches[pin][0] !== NO_NET,
  );
  const wins = latches.priority[0] === Priority.SetWins ? 'set wins' : 'reset wins';
  return [...pins, ...(pins.includes('set') && pins.includes('reset') ? [wins] : [])].join(' ');
}

describe('a latch that an always describes', () => {
  it.each([
    ['always @* if (en) q = d;', 'enable data'],
    ['always @(r or en or d) if (r) q = 0; else if (en) q = d;', 'enable data reset'],
    ["always @* if (~r) q <= 1'b1; else begin if (en & t) q <= d; end", 'enable data set'],
    ['always @* begin if (en) q = d; if (r == 0) q = 0; end', 'enable data reset'],
    ['always @* if (en || r) q = r ? 0 : d;', 'enable data reset'],
    [
      'always @* if (!s) q = 1; else if (r) q = 0; else if (en) q = d;',
      'enable data set reset set wins',
    ],
    ['always @* if (r) q = 0; else if (s) q = 1;', 'set reset reset wins'],
    ['always @* if (s | r) q = s;', 'set reset set wins'],
    ['always @* if (en) q = d ^ r;', 'enable data'],
    ['always @* if (!r) q = 0;', 'enable data'],
    ['always @* if (r) q = 1; else if (s) q = 1;', 'enable data'],
  ])('has the pins that `%s` says', (body, pins) => {
    expect(pinsOf(body)).toBe(pins);
  });

  it('does as its text says with three controls that alternate', () => {
    const { simulate, diagnostics } = bench(`
      input r, s, t, en, d; reg q;
      always @* if (r) q = 0; else if (!s) q = 1; else if (t) q = 0; else if (en) q = d;`);
    expect(diagnostics).toEqual([]);
    const bit = fc.nat(1);
    fc.assert(
      fc.property(fc.array(fc.record({ r: bit, s: bit, t: bit, en: bit, d: bit })), (rows) => {
        const simulation = simulate();
        let q = 0;
        for (const row of [{ r: 1, s: 1, t: 0, en: 0, d: 0 }, ...rows]) {
          if (row.r) q = 0;
          else if (!row.s) q = 1;
          else if (row.t) q = 0;
          else if (row.en) q = row.d;
          simulation.set(row);
          expect(simulation.number('q')).toBe(q);
        }
      }),
      { seed: 32, numRuns: 40 },
    );
  });

  it('shows its clock beside a reset', () => {
    const circuit = circuitOf(`module t (input clk, rst, d, output reg q);
      reg m;
      always @* if (rst) m = 0; else if (!clk) m = d;
      always @* if (rst) q = 0; else if (clk) q = m;
    endmodule`);
    expect(findClockPorts(circuit).ports.map(({ name }) => name)).toEqual(['clk']);
  });
});
