import { describe, expect, it } from 'vitest';
import { Source } from '../../compiler/diagnostics/source.js';
import {
  portSignals,
  signalName,
  signalsOf,
  UnmatchedPattern,
} from '../../compiler/waveform/signalList.js';
import { designFrom } from '../support/ownCircuits.js';

const { circuit } = designFrom(
  new Source(
    'top.v',
    `module leaf(input clk, input d, output reg q); always @(posedge clk) q <= d; endmodule
     module pair(input clk, input [1:0] d, output [1:0] q);
       leaf low(.clk(clk), .d(d[0]), .q(q[0])); leaf high(.clk(clk), .d(d[1]), .q(q[1]));
     endmodule
     module top(input clk, input [3:0] in, output [0:3] out, output \\odd[1] );
       wire [1:0] middle; assign \\odd[1] = in[1];
       pair left(.clk(clk), .d(in[1:0]), .q(middle));
       pair right(.clk(clk), .d(middle), .q(out[2:3])); assign out[0:1] = in[3:2];
     endmodule`,
  ),
);

const { hierarchy } = circuit;

const namesOf = (...patterns: string[]): string[] => {
  const list = signalsOf(circuit, patterns);
  return Array.from({ length: list.count }, (_, entry) => signalName(hierarchy, list, entry));
};

describe('patterns for signals', () => {
  it('choose by name, in the order of the patterns, each signal once', () => {
    expect(namesOf('out', 'in', 'out')).toEqual(['out', 'in']);
    expect(namesOf('left.low.q', '*.low.q')).toEqual(['left.low.q', 'right.low.q']);
  });

  it('stay within a level at *, and pass any levels at **', () => {
    expect(namesOf('*.q')).toEqual(['left.q', 'right.q']);
    expect(namesOf('**.q')).toEqual([
      ...['left.q', 'left.low.q', 'left.high.q'],
      ...['right.q', 'right.low.q', 'right.high.q'],
    ]);
    expect(namesOf('**.in')).toEqual(['in']);
    expect(namesOf('left.**')).toEqual([
      ...['left.clk', 'left.d', 'left.q', 'left.low.clk', 'left.low.d', 'left.low.q'],
      ...['left.high.clk', 'left.high.d', 'left.high.q'],
    ]);
    expect(namesOf('l*.h*.*')).toEqual(['left.high.clk', 'left.high.d', 'left.high.q']);
  });

  it('may begin with the name of the top module', () => {
    expect(namesOf('top.left.q', 'top.in')).toEqual(['left.q', 'in']);
  });

  it('choose parts by declared indices, of either direction', () => {
    expect(namesOf('in[3:2]', 'in[0]', 'out[1:2]')).toEqual(['in[3:2]', 'in[0]', 'out[1:2]']);
    // Of a part, too, the rightmost bit comes first; ports are laid out like that.
    const netsOf = (name: string): Uint32Array =>
      circuit.outputs.find((port) => port.name === name)!.nets;
    const [third, second] = [netsOf('out')[1], netsOf('out')[2]];
    expect(Array.from(signalsOf(circuit, ['out[1:2]']).nets)).toEqual([third, second]);
  });

  it('take a name that ends with brackets for what it is', () => {
    expect(namesOf('odd[1]')).toEqual(['odd[1]']);
  });

  it('that choose nothing are refused', () => {
    expect(() => namesOf('in', 'nothing.*')).toThrow(UnmatchedPattern);
    expect(() => namesOf('nothing.*')).toThrow('nothing.*: no signal has such a name');
    expect(() => namesOf('in[4:3]')).toThrow('in[4:3]: in has no such bits');
    expect(() => namesOf('in[2:3]')).toThrow('in[2:3]: in has no such bits');
    expect(() => namesOf('clk[0]')).toThrow('clk[0]: no signal has such a name');
    expect(() => namesOf('LEFT.q')).toThrow(UnmatchedPattern);
  });
});

describe('all signals', () => {
  it('are every name in every instance, of which the same nets are watched once', () => {
    const list = signalsOf(circuit, []);
    // Five names at the top, three in each of the six instances.
    expect(list.count).toBe(5 + 6 * 3);
    const clocks = namesOf('**.clk');
    expect(clocks).toHaveLength(7);
    expect(signalsOf(circuit, ['**.clk']).nets).toHaveLength(1);
  });

  it('among the ports are those of the top module alone', () => {
    const list = portSignals(circuit);
    const names = Array.from({ length: list.count }, (_, entry) =>
      signalName(hierarchy, list, entry),
    );
    expect(names).toEqual(['clk', 'in', 'out', 'odd[1]']);
  });
});
