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

  it.each([
    ['not g1 (y, a);', 'not g1'],
    ['ND2 u7 (.A(a), .Y(y));', 'not in u7'],
    ['ND2 #(.W(f(2)), .T(1.5)) u7 [3:0] (y, a);', 'not in u7'],
    ['ND2 #2 \\u/7[1] (y, a);', 'not in \\u/7[1]'],
    ['not (y, a);', 'not'],
    ['y = f (a);', 'not'],
    ['not (weak0, weak1) (y, a);', 'not'],
    ['if (a) y = b;', 'not'],
  ])('names the instance that begins with %s', (text, named) => {
    const builder = new CircuitBuilder();
    builder.at(builder.addSource(new Source('top.v', `// a line\n${text}`)), 10);
    const net = builder.gate(GateKind.Not, [builder.gate(GateKind.Zero, [])]);
    expect(describeNets(builder.finish('top'), [net])).toBe(`${named} at top.v:2`);
  });
});
