import { describe, expect, it } from 'vitest';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import { NO_NET } from '../../compiler/circuit/ids.js';
import { inputRowNets, modelLayout, outputRowNets } from '../../compiler/circuit/modelLayout.js';
import { powerUpModes, powerUpState } from '../../compiler/circuit/powerUp.js';
import { powerUpSeed, RandomBits } from '../../runtime/random.js';
import { smallCircuit } from '../support/smallCircuit.js';

const circuit = smallCircuit({
  inputs: ['a', 'clk', 'b[0:2]', 'c[1:0]'],
  outputs: ['y[1:0]', 'z'],
  registers: { q: { clock: 'clk', data: 'a', initial: 1 }, r: { clock: 'c[1]', data: 'a' } },
  latches: { l: { enable: 'a', data: 'r' } },
  gates: { 'y[1]': 'buf q', 'y[0]': 'buf r', z: 'buf l' },
});
const clocks = findClockPorts(circuit);

describe('modelLayout', () => {
  const layout = modelLayout(circuit, clocks, false);

  it('has the data inputs and the outputs in declaration order', () => {
    expect(layout.inputs.ports).toEqual([
      { name: 'a', width: 1, offset: 0, msb: 0, lsb: 0, isVector: false },
      { name: 'b', width: 3, offset: 1, msb: 0, lsb: 2, isVector: true },
      { name: 'c', width: 2, offset: 4, msb: 1, lsb: 0, isVector: true },
    ]);
    expect(layout.inputs).toMatchObject({ bits: 6, words: 1 });
    expect(layout.outputs.ports.map((port) => [port.name, port.offset])).toEqual([
      ['y', 0],
      ['z', 2],
    ]);
  });

  it('names the clocks and the state, latches after registers', () => {
    expect(layout.clocks).toEqual(['clk', 'c[1]']);
    expect(layout.stateNames).toEqual(['q', 'r', 'l']);
    expect(layout.name).toBe('small');
  });

  it('goes with the nets of each row bit, without those of clock bits', () => {
    const [a, , b, c] = circuit.inputs;
    expect(Array.from(inputRowNets(circuit, clocks))).toEqual([
      ...a!.nets,
      ...b!.nets,
      c!.nets[0],
      NO_NET,
    ]);
    expect(Array.from(outputRowNets(circuit))).toEqual([
      ...circuit.outputs[0]!.nets,
      ...circuit.outputs[1]!.nets,
    ]);
  });
});

describe('powerUpState', () => {
  it('keeps what the netlist gives and fills the rest by the mode', () => {
    expect(Array.from(powerUpState(circuit, 'zero'))).toEqual([1, 0, 0]);
    expect(Array.from(powerUpState(circuit, 'one'))).toEqual([1, 1, 1]);
    expect(Array.from(powerUpState(circuit, 'unknown'))).toEqual([1, 2, 2]);
    expect(powerUpModes).toEqual(['zero', 'one', 'random', 'unknown']);
  });

  it('draws random bits from the stream of the seed, one for each element', () => {
    const many = smallCircuit({
      inputs: ['clk'],
      outputs: [],
      registers: Object.fromEntries(
        Array.from({ length: 70 }, (_, i) => [
          `q${i}`,
          { clock: 'clk', data: 'clk', initial: i === 40 ? 0 : 2 },
        ]),
      ),
    });
    const random = new RandomBits(powerUpSeed(11));
    const words = [random.next(), random.next(), random.next()];
    const expected = Array.from({ length: 70 }, (_, i) =>
      i === 40 ? 0 : (words[i >> 5]! >>> (i & 31)) & 1,
    );
    expect(Array.from(powerUpState(many, 'random', 11))).toEqual(expected);
  });
});
