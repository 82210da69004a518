import { describe, expect, it } from 'vitest';
import { Edge } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { modelLayout } from '../../../compiler/circuit/modelLayout.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { RunFault } from '../../../runtime/engine.js';
import { packRows, play, referenceFor } from '../../support/rows.js';
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

describe('a cycle', () => {
  it('samples outputs before the edge and captures at it', () => {
    expect(playSmall(flipFlop(), ['1', '0', '1', '1', '0'])).toEqual(['0', '1', '0', '1', '1']);
  });

  it('gives the response of s27 as traced by hand', () => {
    // s27: F. Brglez, D. Bryan, K. Kozminski, ISCAS 1989.
    const engine = referenceFor(
      smallCircuit({
        inputs: ['CK', 'G0', 'G1', 'G2', 'G3'],
        outputs: ['G17'],
        registers: {
          G5: { clock: 'CK', data: 'G10' },
          G6: { clock: 'CK', data: 'G11' },
          G7: { clock: 'CK', data: 'G13' },
        },
        gates: {
          G14: 'not G0',
          G17: 'not G11',
          G8: 'and G14 G6',
          G15: 'or G12 G8',
          G16: 'or G3 G8',
          G9: 'nand G16 G15',
          G10: 'nor G14 G11',
          G11: 'nor G5 G9',
          G12: 'nor G1 G7',
          G13: 'nor G2 G12',
        },
      }),
    );
    // G0 G1 G2 G3, then G17 in that cycle, then G5 G6 G7 after it.
    const trace = [
      ['0000', '1', '000'],
      ['1111', '1', '100'],
      ['1000', '1', '100'],
      ['0010', '1', '000'],
      ['0101', '1', '001'],
      ['0001', '1', '001'],
      ['1011', '1', '100'],
      ['0010', '1', '000'],
      ['1011', '0', '010'],
      ['0010', '0', '010'],
    ];
    for (const [inputs, output, state] of trace) {
      expect(play(engine, [inputs!])).toEqual([output]);
      expect(engine.state().join('')).toBe(state);
    }
  });

  it('lets registers on the other edge capture when the clock returns, after the first ones', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['rose', 'fell'],
      registers: {
        rose: { clock: 'clk', data: 'd' },
        fell: { clock: 'clk', data: 'rose', edge: Edge.Falling },
      },
    };
    expect(playSmall(circuit, ['1', '0', '0'])).toEqual(['0 0', '1 1', '0 0']);
  });

  it('starts high where all registers capture on the falling edge, so that logic sees that level', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['q', 'level'],
      registers: { q: { clock: 'clk', data: 'd', edge: Edge.Falling } },
      gates: { level: 'buf clk' },
    };
    expect(playSmall(circuit, ['1', '0'])).toEqual(['0 1', '1 1']);
  });

  it('lets all registers of an edge capture at the same moment', () => {
    const rotating: SmallCircuit = {
      inputs: ['clk'],
      outputs: ['a', 'b', 'c'],
      registers: {
        a: { clock: 'clk', data: 'c', initial: 1 },
        b: { clock: 'clk', data: 'a' },
        c: { clock: 'clk', data: 'b' },
      },
    };
    expect(playSmall(rotating, repeated('', 4))).toEqual(['1 0 0', '0 1 0', '0 0 1', '1 0 0']);
  });

  it('captures the data from before the edge where the data depends on the clock', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['q'],
      registers: { q: { clock: 'clk', data: 'masked' } },
      gates: { low: 'not clk', masked: 'and d low' },
    };
    expect(playSmall(circuit, ['1', '0', '0'])).toEqual(['0', '1', '0']);
  });

  it('holds one row with stride 0 and keeps its state from call to call', () => {
    const engine = referenceFor(smallCircuit(flipFlop({ data: 'n' })));
    const toggling = referenceFor(
      smallCircuit({
        inputs: ['clk', 'd'],
        outputs: ['q'],
        registers: { q: { clock: 'clk', data: 'n' } },
        gates: { n: 'xor q d' },
      }),
    );
    const response = new Uint32Array(3);
    toggling.run(3, Uint32Array.of(1), 0, response);
    expect(Array.from(response)).toEqual([0, 1, 0]);
    toggling.run(2, Uint32Array.of(1), 0, response);
    expect(Array.from(response)).toEqual([1, 0, 0]);
    engine.run(2, Uint32Array.of(1), 0, undefined);
    expect(Array.from(engine.state())).toEqual([0]);
  });
});

describe('clocks made by logic', () => {
  const divider = (stages: number): SmallCircuit => {
    const registers: NonNullable<SmallCircuit['registers']> = {};
    const gates: Record<string, string> = {};
    for (let i = 0; i < stages; i++) {
      const edge = i === 0 ? Edge.Rising : Edge.Falling;
      Object.assign(registers, {
        [`q${i}`]: { clock: i === 0 ? 'clk' : `q${i - 1}`, data: `n${i}`, edge },
      });
      gates[`n${i}`] = `not q${i}`;
    }
    return { inputs: ['clk'], outputs: Object.keys(registers).reverse(), registers, gates };
  };

  it('ripple through a counter within one cycle', () => {
    const counts = playSmall(divider(4), repeated('', 20)).map((row) => row.replaceAll(' ', ''));
    expect(counts).toEqual(
      Array.from({ length: 20 }, (_, k) => (k % 16).toString(2).padStart(4, '0')),
    );
  });

  it('let a register on a divided clock see what the first wave stored', () => {
    // `a <= d` and `half <= ~half` at posedge clk; `b <= a` at posedge half: b gets the new a.
    const circuit: SmallCircuit = {
      inputs: ['clk', 'd'],
      outputs: ['half', 'a', 'b'],
      registers: {
        half: { clock: 'clk', data: 'other' },
        a: { clock: 'clk', data: 'd' },
        b: { clock: 'half', data: 'a' },
      },
      gates: { other: 'not half' },
    };
    const rows = playSmall(circuit, ['1', '0', '0', '0']);
    expect(rows).toEqual(['0 0 0', '1 1 1', '0 0 1', '1 0 0']);
  });

  it('stop while the latch of a gating cell holds 0, without skew against the free clock', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'en', 'd'],
      outputs: ['free', 'gated'],
      registers: {
        free: { clock: 'clk', data: 'd' },
        gated: { clock: 'gclk', data: 'free' },
      },
      latches: { open: { enable: 'low', data: 'en' } },
      gates: { low: 'not clk', gclk: 'and clk open' },
    };
    // en, d; `gated` takes what `free` was before the edge, in cycles with en = 1 only.
    const rows = playSmall(circuit, ['11', '10', '01', '01', '10', '00']);
    expect(rows).toEqual(['0 0', '1 0', '0 1', '1 1', '1 1', '0 1']);
  });

  it('move with an input where the gate lets it through, and capture the data from before', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'hold', 'd'],
      outputs: ['q', 'side'],
      registers: {
        q: { clock: 'gclk', data: 'd' },
        side: { clock: 'clk', data: 'd' },
      },
      gates: { gclk: 'or clk hold' },
    };
    // hold rises in row 1 together with d: an edge that captures the d of row 0. While hold stays
    // 1 there is no edge.
    const rows = playSmall(circuit, ['00', '11', '11', '00', '00']);
    expect(rows).toEqual(['0 0', '0 0', '0 1', '0 1', '0 0']);
    const later = playSmall(circuit, ['01', '10', '10', '00', '00']);
    expect(later).toEqual(['0 0', '1 1', '1 0', '1 0', '0 0']);
  });

  it('see no edge in the first row, which only establishes levels', () => {
    const circuit: SmallCircuit = {
      inputs: ['clk', 'hold', 'd'],
      outputs: ['q'],
      registers: { q: { clock: 'gclk', data: 'd' }, other: { clock: 'clk', data: 'd' } },
      gates: { gclk: 'or clk hold' },
    };
    expect(playSmall(circuit, ['11', '11', '01', '11'])).toEqual(['0', '0', '0', '1']);
  });

  it('that never come to rest are refused by name', () => {
    // Any move of c moves a, any move of a moves b, and any move of b moves c.
    const circuit: SmallCircuit = {
      inputs: ['clk'],
      outputs: ['a', 'b'],
      registers: {
        a1: { clock: 'c', data: 'na1' },
        a2: { clock: 'c', data: 'na2', edge: Edge.Falling },
        b1: { clock: 'a', data: 'nb1' },
        b2: { clock: 'a', data: 'nb2', edge: Edge.Falling },
      },
      gates: {
        c: 'xor clk b',
        a: 'xor a1 a2',
        b: 'xor b1 b2',
        na1: 'not a1',
        na2: 'not a2',
        nb1: 'not b1',
        nb2: 'not b2',
      },
    };
    const engine = referenceFor(smallCircuit(circuit));
    expect(() => play(engine, [''])).toThrow(RunFault);
    engine.reset(new Uint8Array(4));
    expect(() => play(engine, [''])).toThrow(/go on changing: [ac]$/);
    const three = referenceFor(smallCircuit(circuit), true);
    three.reset(new Uint8Array(4));
    expect(play(three, ['', ''])[1]).toContain('x');
  });
});

describe('misuse', () => {
  it('is refused with the numbers got and expected', () => {
    const engine = referenceFor(smallCircuit(flipFlop()));
    expect(() => engine.reset(new Uint8Array(2))).toThrow('expected 1 state values, got 2');
    expect(() => engine.reset(Uint8Array.of(2))).toThrow('q takes 0 to 1, got 2');
    expect(() => engine.run(-1, new Uint32Array(1), 0, undefined)).toThrow('got -1');
    expect(() => engine.run(2, new Uint32Array(1), 1, undefined)).toThrow('stimulus needs 2 words');
    expect(() => engine.run(2, new Uint32Array(2), 0.5, undefined)).toThrow('stimulusStride');
    expect(() => engine.run(2, new Uint32Array(2), 1, new Uint32Array(1))).toThrow(
      'response needs 2 words, got 1',
    );
    expect(() => engine.run(0, new Uint32Array(0), 0, new Uint32Array(0))).not.toThrow();
  });
});

describe('a vector port of which one bit is a clock', () => {
  it('keeps its width in the row, and that bit is not looked at', () => {
    const circuit = smallCircuit({
      inputs: ['in[1:0]'],
      outputs: ['q'],
      registers: { q: { clock: 'in[1]', data: 'in[0]' } },
    });
    const clocks = findClockPorts(circuit);
    const engine = new ReferenceEngine(circuit, {
      clocks,
      layout: modelLayout(circuit, clocks, false),
    });
    expect(engine.layout.clocks).toEqual(['in[1]']);
    const row = packRows(engine.layout, engine.layout.inputs, ['11']);
    expect(Array.from(row)).toEqual([3]);
    expect(play(engine, ['11', '10', '00'])).toEqual(['0', '1', '0']);
  });
});
