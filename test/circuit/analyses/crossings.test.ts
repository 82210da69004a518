import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { clockRootsOf } from '../../../compiler/circuit/analyses/clockRoots.js';
import { Crossings } from '../../../compiler/circuit/analyses/crossings.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { randomCircuit } from '../../support/randomCircuit.js';
import { type SmallCircuit, smallCircuit } from '../../support/smallCircuit.js';

const SEED = 20261203;

function crossings(spec: SmallCircuit): [number, number][] {
  const circuit = smallCircuit(spec);
  const found = new Crossings(circuit, clockRootsOf(circuit, findClockPorts(circuit)));
  return Array.from(found.captures, (register) => {
    const { from, to } = found.into(register);
    return [from, to];
  });
}

describe('crossings', () => {
  it('go from registers on one clock to registers on another, through gates and latches', () => {
    expect(
      crossings({
        inputs: ['clk_a', 'clk_b', 'en', 'd'],
        outputs: [],
        gates: { m: 'and own d l', w: 'not own' },
        latches: { l: { enable: 'en', data: 'a' } },
        registers: {
          a: { clock: 'clk_a', data: 'd' },
          own: { clock: 'clk_b', data: 'w' },
          b: { clock: 'clk_b', data: 'm' },
        },
      }),
    ).toEqual([[0, 2]]);
  });

  it('are none between a clock and what divides or gates it', () => {
    expect(
      crossings({
        inputs: ['clk', 'clk_b', 'en', 'd'],
        outputs: [],
        gates: { n: 'not div', g: 'and clk en' },
        registers: {
          div: { clock: 'clk', data: 'n' },
          slow: { clock: 'div', data: 'd' },
          fast: { clock: 'clk', data: 'slow' },
          gated: { clock: 'g', data: 'fast' },
          other: { clock: 'clk_b', data: 'd' },
        },
      }),
    ).toEqual([]);
  });

  it('go into a divided clock from another port', () => {
    expect(
      crossings({
        inputs: ['clk_a', 'clk_b', 'd'],
        outputs: [],
        gates: { n: 'not div' },
        registers: {
          div: { clock: 'clk_a', data: 'n' },
          slow: { clock: 'div', data: 'b' },
          b: { clock: 'clk_b', data: 'd' },
        },
      }),
    ).toEqual([[2, 1]]);
  });

  it('are none where there is one clock', () =>
    fc.assert(
      fc.property(randomCircuit({ clocking: 'divided', latches: true }), (circuit) => {
        const roots = clockRootsOf(circuit, findClockPorts(circuit, ['clk']));
        expect(new Crossings(circuit, roots).captures.length).toBe(0);
      }),
      { seed: SEED, numRuns: 50 },
    ));
});
