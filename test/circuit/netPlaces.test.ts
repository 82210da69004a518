import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { describeNets } from '../../compiler/circuit/netPlaces.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { smallCircuit } from '../support/smallCircuit.js';

describe('describeNets', () => {
  it('names nets, at most as many as asked for', () => {
    const circuit = smallCircuit({ inputs: ['a', 'b', 'c'], outputs: [] });
    const nets = circuit.inputs.flatMap((port) => Array.from(port.nets));
    expect(describeNets(circuit, nets)).toBe('a, b, c');
    expect(describeNets(circuit, nets, 2)).toBe('a, b and 1 more');
  });

  it('tells the line of the driver where the source is known', () => {
    const builder = new CircuitBuilder();
    const source = builder.addSource(new Source('top.v', 'line one\nline two\n'));
    builder.at(source, 12);
    const net = builder.gate(GateKind.Zero, []);
    const inverted = builder.gate(GateKind.Not, [net]);
    const circuit = builder.finish('top');
    expect(describeNets(circuit, [inverted])).toBe('not at top.v:2');
  });
});
