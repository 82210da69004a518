import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { settlingOrder } from '../../compiler/native/settlingOrder.js';
import { smallCircuit } from '../support/smallCircuit.js';

describe('the settling order', () => {
  const circuit = smallCircuit({
    inputs: ['a', 'b'],
    outputs: ['y', 'z'],
    gates: { z: 'xor y a', y: 'and p q', p: 'not a', q: 'or a b', unread: 'not b' },
  });
  const [y, z] = circuit.outputs.map((port) => port.nets[0]!);

  it('places each net after its fan-in', () => {
    const order = settlingOrder(circuit, [z!])!;
    for (const [place, net] of order.entries()) {
      const fanin = circuit.fanin.slice(circuit.faninStart[net], circuit.faninStart[net + 1]);
      for (const source of fanin) expect(order.indexOf(source)).toBeLessThan(place);
      expect(fanin.every((source) => order.includes(source))).toBe(true);
    }
  });

  it('holds each net of the cones once and no other', () => {
    const order = settlingOrder(circuit, [y!, z!, y!])!;
    expect(new Set(order).size).toBe(order.length);
    expect(order.length).toBe(6);
  });

  it('is refused to a loop of gates', () => {
    const loop = smallCircuit({
      inputs: ['a'],
      outputs: ['y'],
      gates: { y: 'nand a x', x: 'nand a y' },
    });
    expect(settlingOrder(loop, loop.outputs[0]!.nets)).toBeUndefined();
  });

  it('is found for a chain of a hundred thousand gates', () => {
    const builder = new CircuitBuilder();
    const first = builder.net();
    builder.input('a', [first]);
    let last = first;
    for (let i = 0; i < 100_000; i++) last = builder.gate(GateKind.Not, [last]);
    builder.output('y', [last]);
    const order = settlingOrder(builder.finish('chain'), [last])!;
    expect(order.length).toBe(100_001);
    expect(order[0]).toBe(first);
  });
});
