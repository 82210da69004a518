import { describe, expect, it } from 'vitest';
import { Edge, Priority } from '../../../compiler/circuit/circuit.js';
import type { RunFault } from '../../../runtime/engine.js';
import { play, referenceFor } from '../../support/rows.js';
import { type SmallCircuit, smallCircuit } from '../../support/smallCircuit.js';

const playSmall = (spec: SmallCircuit, rows: readonly string[], threeValued = false) =>
  play(referenceFor(smallCircuit(spec), threeValued), rows);

const repeated = (row: string, times: number) => Array.from({ length: times }, () => row);

/** q follows d at the edge; outputs q. */
const flipFlop = (extra: object = {}, inputs: string[] = []): SmallCircuit => ({
  inputs: ['clk', 'd', ...inputs],
  outputs: ['q'],
  registers: { q: { clock: 'clk', data: 'd', ...extra } },
});

describe('asynchronous set and reset', () => {
  it('act while the logic settles, before the outputs are sampled', () => {
    const rows = ['100', '010', '100', '001', '000'];
    const circuit = flipFlop({ set: 's', reset: 'r' }, ['s', 'r']);
    expect(playSmall(circuit, rows)).toEqual(['0', '1', '1', '0', '0']);
  });

  it('win over the capture, by the priority of the cell', () => {
    const both = (priority: number) =>
      playSmall(flipFlop({ set: 's', reset: 'r', priority }, ['s', 'r']), ['111', '011', '000']);
    expect(both(Priority.ResetWins)).toEqual(['0', '0', '0']);
    expect(both(Priority.SetWins)).toEqual(['1', '1', '1']);
    expect(both(Priority.Unknown)).toEqual(['0', '0', '0']);
  });

  it('win over an edge at which they are released', () => {
    // A reset synchronizer: `go` rises at the edge, so q is still in reset at that edge.
    const circuit: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['go', 'q'],
      registers: {
        go: { clock: 'clk', data: 'one' },
        q: { clock: 'clk', data: 'd', reset: 'stop' },
      },
      gates: { one: 'one', stop: 'not go' },
    };
    expect(playSmall(circuit, ['1', '1', '1'])).toEqual(['0 0', '1 0', '1 1']);
  });

  it('clear the counter that feeds them: ten states, no eleventh', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk'],
      outputs: ['q3', 'q2', 'q1', 'q0'],
      registers: {
        q0: { clock: 'clk', data: 'n0', reset: 'ten' },
        q1: { clock: 'q0', data: 'n1', reset: 'ten', edge: Edge.Falling },
        q2: { clock: 'q1', data: 'n2', reset: 'ten', edge: Edge.Falling },
        q3: { clock: 'q2', data: 'n3', reset: 'ten', edge: Edge.Falling },
      },
      gates: { ten: 'and q3 q1', n0: 'not q0', n1: 'not q1', n2: 'not q2', n3: 'not q3' },
    };
    const counts = playSmall(circuit, repeated('', 23)).map((row) =>
      Number.parseInt(row.replaceAll(' ', ''), 2),
    );
    expect(counts).toEqual(Array.from({ length: 23 }, (_, k) => k % 10));
  });

  it('see no glitch of the logic in front of them', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'a'],
      outputs: ['q'],
      registers: { q: { clock: 'clk', data: 'q', set: 'hazard' } },
      gates: { hazard: 'and a late', late: 'not mid', mid: 'buf copy', copy: 'buf a' },
    };
    expect(playSmall(circuit, ['0', '1', '0', '1', '0'])).toEqual(repeated('0', 5));
  });
});

describe('latches', () => {
  it('pass while enabled and hold otherwise', () => {
    const circuit: SmallCircuit = {
      inputs: ['load', 'd'],
      outputs: ['q'],
      latches: { q: { enable: 'load', data: 'd' } },
    };
    expect(playSmall(circuit, ['01', '11', '00', '10', '01'])).toEqual(['0', '1', '1', '0', '0']);
  });

  it('close on the data from before when enable and data change at one moment', () => {
    const circuit: SmallCircuit = {
      inputs: ['load'],
      outputs: ['q'],
      latches: { q: { enable: 'load', data: 'late' } },
      gates: { late: 'not copy', copy: 'buf load' },
    };
    expect(playSmall(circuit, ['1', '0', '1', '0'])).toEqual(['0', '0', '0', '0']);
  });

  it('in opposite phases make an edge-triggered pair', () => {
    const pair: SmallCircuit = {
      inputs: ['clk'],
      outputs: ['q'],
      registers: { tick: { clock: 'clk', data: 'tick' } },
      latches: { m: { enable: 'low', data: 'n' }, q: { enable: 'clk', data: 'm' } },
      gates: { low: 'not clk', n: 'not q' },
    };
    expect(playSmall(pair, repeated('', 5))).toEqual(['0', '1', '0', '1', '0']);
  });

  it('without enable are set and reset alone', () => {
    const circuit: SmallCircuit = {
      inputs: ['s', 'r'],
      outputs: ['q'],
      latches: { q: { set: 's', reset: 'r', priority: Priority.Unknown } },
    };
    const rows = ['10', '00', '01', '00', '11', '00'];
    expect(playSmall(circuit, rows)).toEqual(['1', '1', '0', '0', '0', '0']);
    expect(playSmall(circuit, rows, true)).toEqual(['1', '1', '0', '0', 'x', 'x']);
  });
});

describe('combinational loops', () => {
  const crossed: SmallCircuit = {
    inputs: ['s', 'r'],
    outputs: ['q', 'qn'],
    gates: { q: 'nor r qn', qn: 'nor s q' },
  };
  const ring: SmallCircuit = {
    inputs: ['run', 'a'],
    outputs: ['a1', 'y'],
    gates: { a1: 'nand run a3', a2: 'not a1', a3: 'not a2', y: 'and a a1' },
  };

  it('remember in two crossed gates', () => {
    const rows = ['10', '00', '01', '00', '10'];
    expect(playSmall(crossed, rows)).toEqual(['1 0', '1 0', '0 1', '0 1', '1 0']);
  });

  it('start unknown in three-valued runs until something decides', () => {
    expect(playSmall(crossed, ['00', '10', '00', 'x0', '0x'], true)).toEqual([
      'x x',
      '1 0',
      '1 0',
      '1 0',
      'x x',
    ]);
  });

  it('settle in the order of the loop where two results are possible', () => {
    // After s = r = 1 both outputs are 0. Both nets are read as often, so the order starts from q,
    // the lower one, and has what q reads before it.
    expect(playSmall(crossed, ['11', '00'])).toEqual(['0 0', '0 1']);
  });

  it('that oscillate are refused with the cycle and the names', () => {
    const engine = referenceFor(smallCircuit(ring));
    const run = () => play(engine, ['00', '00', '10', '00']);
    expect(run).toThrow('these nets go on changing: a1, a3, a2');
    engine.reset(new Uint8Array(1));
    try {
      run();
    } catch (error) {
      expect((error as RunFault).completed).toBe(2);
    }
    engine.reset(new Uint8Array(1));
    expect(play(engine, ['01', '01'])).toEqual(['1 1', '1 1']);
  });

  it('that oscillate become x in three-valued runs, and recover', () => {
    expect(playSmall(ring, ['01', '11', '10', '01'], true)).toEqual(['1 1', 'x x', 'x 0', '1 1']);
  });

  it('of a single gate that reads itself settle too', () => {
    const sticky: SmallCircuit = { inputs: ['a'], outputs: ['y'], gates: { y: 'or a y' } };
    expect(playSmall(sticky, ['0', '1', '0'])).toEqual(['0', '1', '1']);
    expect(playSmall(sticky, ['0', '1', '0'], true)).toEqual(['x', '1', '1']);
  });
});

describe('x on the pins of state elements', () => {
  it('keeps a register whose clock edge is uncertain only where data and old value agree', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'g', 'd'],
      outputs: ['q'],
      registers: { q: { clock: 'gclk', data: 'd' }, free: { clock: 'clk', data: 'd' } },
      gates: { gclk: 'and clk g' },
    };
    const engine = referenceFor(smallCircuit(circuit), true);
    engine.reset(Uint8Array.of(0, 0));
    expect(play(engine, ['x0', 'x1', '01', '11', '00'])).toEqual(['0', '0', 'x', 'x', '1']);
  });

  it('counts a fall from or to x as an uncertain falling edge', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'g', 'd'],
      outputs: ['q'],
      registers: {
        q: { clock: 'gclk', data: 'd', edge: Edge.Falling },
        free: { clock: 'clk', data: 'd' },
      },
      gates: { gclk: 'and clk g' },
    };
    const engine = referenceFor(smallCircuit(circuit), true);
    engine.reset(Uint8Array.of(0, 0));
    expect(play(engine, ['x0', 'x1', '11', '00'])).toEqual(['0', '0', 'x', '1']);
  });

  it('merges set, reset and latch enable the same way', () => {
    const flop = flipFlop({ set: 's', reset: 'r' }, ['s', 'r']);
    const engine = referenceFor(smallCircuit(flop), true);
    engine.reset(Uint8Array.of(0));
    expect(play(engine, ['00x', '1x0', '010', '1x0', '10x'])).toEqual(['0', 'x', '1', '1', 'x']);
    const latch: SmallCircuit = {
      inputs: ['load', 'd'],
      outputs: ['q'],
      latches: { q: { enable: 'load', data: 'd' } },
    };
    expect(playSmall(latch, ['x0', '10', 'x0', 'x1', '0x'], true)).toEqual([
      'x',
      '0',
      '0',
      'x',
      'x',
    ]);
  });

  it('lets a register without start value go from x to its data', () => {
    expect(playSmall(flipFlop(), ['1', 'x', '0'], true)).toEqual(['x', '1', 'x']);
  });
});
