import { describe, expect, it } from 'vitest';
import { Edge } from '../../compiler/circuit/circuit.js';
import { designOf } from '../../compiler/compile.js';
import { obstacleToOneStep } from '../../compiler/native/oneStep.js';
import { type SmallCircuit, smallCircuit } from '../support/smallCircuit.js';

const obstacle = (spec: Partial<SmallCircuit>, threeValued = false) =>
  obstacleToOneStep(
    designOf(smallCircuit({ inputs: ['clk', 'd', 'r'], outputs: ['q'], ...spec }), { threeValued }),
  );

describe('a cycle is one step', () => {
  it('where all registers capture on one edge of a clock', () => {
    expect(
      obstacle({
        registers: { q: { clock: 'clk', data: 'p' }, p: { clock: 'clk', data: 'd' } },
      }),
    ).toBeUndefined();
  });

  it('where inverters turn one edge into the other', () => {
    expect(
      obstacle({
        gates: { nclk: 'not clk' },
        registers: {
          q: { clock: 'clk', data: 'p' },
          p: { clock: 'nclk', data: 'd', edge: Edge.Falling },
        },
      }),
    ).toBeUndefined();
  });

  it('where all registers capture on the falling edge', () => {
    const falling = { clock: 'clk', data: 'd', edge: Edge.Falling };
    expect(obstacle({ registers: { q: falling } })).toBeUndefined();
  });

  it('where logic of data inputs resets', () => {
    expect(
      obstacle({
        gates: { n: 'nor r d' },
        registers: { q: { clock: 'clk', data: 'd', reset: 'n' } },
      }),
    ).toBeUndefined();
  });

  it('where there is no register', () => {
    expect(obstacle({ gates: { q: 'and d r' } })).toBeUndefined();
  });
});

describe('a cycle is more than one step, and the reason is told', () => {
  it('where there is a latch', () => {
    const latches = { q: { enable: 'clk', data: 'd' } };
    expect(obstacle({ latches })).toBe('there are latches: q');
  });

  it('where a gate drives a clock pin', () => {
    const registers = { p: { clock: 'clk', data: 'd' }, q: { clock: 'gated', data: 'd' } };
    expect(obstacle({ registers, gates: { gated: 'and clk r' } })).toBe(
      'logic drives the clock pin of q',
    );
  });

  it('where a register drives a clock pin', () => {
    const registers = { p: { clock: 'clk', data: 'd' }, q: { clock: 'p', data: 'd' } };
    expect(obstacle({ registers })).toBe('logic drives the clock pin of q');
  });

  it('where registers capture on both edges', () => {
    const registers = {
      p: { clock: 'clk', data: 'd' },
      q: { clock: 'clk', data: 'p', edge: Edge.Falling },
    };
    expect(obstacle({ registers })).toBe('q captures when the clock returns');
  });

  it('where a register resets another', () => {
    const registers = {
      p: { clock: 'clk', data: 'd' },
      q: { clock: 'clk', data: 'd', reset: 'n' },
    };
    expect(obstacle({ registers, gates: { n: 'or p r' } })).toBe(
      'set or reset of q depends on more than data inputs',
    );
  });

  it('where the clock resets', () => {
    const registers = { q: { clock: 'clk', data: 'd', set: 'n' } };
    expect(obstacle({ registers, gates: { n: 'and clk r' } })).toBe(
      'set or reset of q depends on more than data inputs',
    );
  });

  it('where values may be x', () => {
    const registers = { q: { clock: 'clk', data: 'd' } };
    expect(obstacle({ registers }, true)).toBe('the run is three-valued');
  });
});
