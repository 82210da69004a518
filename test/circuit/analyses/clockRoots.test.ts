import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  ClockPath,
  clockRootsOf,
  portEdge,
} from '../../../compiler/circuit/analyses/clockRoots.js';
import { Edge } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { randomCircuit } from '../../support/randomCircuit.js';
import { type SmallCircuit, smallCircuit } from '../../support/smallCircuit.js';

const SEED = 20261202;

/** For each register in order: its clock ports, how it hangs on them, and the port's edge. */
function hangs(spec: SmallCircuit, named?: readonly string[]) {
  const circuit = smallCircuit(spec);
  const clocks = findClockPorts(circuit, named);
  const roots = clockRootsOf(circuit, clocks);
  const pathNames = Object.keys(ClockPath);
  return Array.from({ length: circuit.registers.count }, (_, r) => [
    roots.sets
      .members(roots.registers.roots[r]!)
      .map((port) => clocks.ports[port]!.name)
      .join(),
    pathNames[roots.registers.path[r]!],
    portEdge(circuit, roots, r),
  ]);
}

describe('clock roots', () => {
  it('tell direct, buffered and gated pins apart, and the edge of the port', () => {
    const pins = { data: 'd' };
    expect(
      hangs({
        inputs: ['clk', 'd', 'en'],
        outputs: [],
        gates: {
          n: 'not clk',
          nn: 'nand n',
          one: 'one',
          b: 'and clk one',
          g: 'nor clk en',
          x: 'xor clk en',
        },
        registers: {
          q0: { ...pins, clock: 'clk' },
          q1: { ...pins, clock: 'n' },
          q2: { ...pins, clock: 'nn', edge: Edge.Falling },
          q3: { ...pins, clock: 'b' },
          q4: { ...pins, clock: 'g' },
          q5: { ...pins, clock: 'x' },
        },
      }),
    ).toEqual([
      ['clk', 'Direct', Edge.Rising],
      ['clk', 'Buffered', Edge.Falling],
      ['clk', 'Buffered', Edge.Falling],
      ['clk', 'Buffered', Edge.Rising],
      ['clk', 'Gated', Edge.Falling],
      ['clk', 'Gated', -1],
    ]);
  });

  it('follow divided clocks through any number of registers, gates and rings', () => {
    expect(
      hangs({
        inputs: ['clk', 'd', 'en'],
        outputs: [],
        gates: { g: 'and q1 en', ring: 'or q2 q3', zero: 'zero' },
        registers: {
          q3: { clock: 'ring', data: 'd' },
          q2: { clock: 'g', data: 'd' },
          q1: { clock: 'q0', data: 'd' },
          q0: { clock: 'clk', data: 'd' },
          lost: { clock: 'zero', data: 'd' },
        },
      }),
    ).toEqual([
      ['clk', 'Divided', -1],
      ['clk', 'Divided', -1],
      ['clk', 'Divided', -1],
      ['clk', 'Direct', Edge.Rising],
      ['', 'None', -1],
    ]);
  });

  it('tell all clocks that a selected clock comes from', () => {
    const [first, second] = hangs({
      inputs: ['clk_a', 'clk_b', 's', 'd'],
      outputs: [],
      gates: { c: 'mux s clk_a clk_b', select: 'mux clk_a s d' },
      registers: { q0: { clock: 'c', data: 'd' }, q1: { clock: 'select', data: 'd' } },
    });
    expect(first).toEqual(['clk_a,clk_b', 'Gated', Edge.Rising]);
    // A clock that selects arrives with either polarity.
    expect(second).toEqual(['clk_a', 'Gated', -1]);
  });

  it('stop to tell clocks apart where very many meet', () => {
    const clocks = Array.from({ length: 12 }, (_, i) => `clk${i}`);
    expect(
      hangs({
        inputs: [...clocks, 'd'],
        outputs: [],
        gates: { c: `or ${clocks.join(' ')}` },
        registers: { q: { clock: 'c', data: 'd' } },
      }),
    ).toEqual([['', 'Gated', Edge.Rising]]);
  });

  it('leave no register of a random circuit without a clock that has one', () =>
    fc.assert(
      fc.property(randomCircuit({ clocking: 'gated' }), (circuit) => {
        const clocks = findClockPorts(circuit);
        const { registers, sets } = clockRootsOf(circuit, clocks);
        for (let r = 0; r < circuit.registers.count; r++) {
          expect(sets.members(registers.roots[r]!)).toEqual([0]);
        }
      }),
      { seed: SEED, numRuns: 50 },
    ));
});
