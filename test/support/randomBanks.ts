import fc from 'fast-check';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import type { NetId } from '../../compiler/circuit/ids.js';

interface BankRecipe {
  readonly width: number;
  /** Where the data comes from: inputs, the bank before, the bit before, or gates of both. */
  readonly data: 'input' | 'bank' | 'shift' | 'logic';
  /** Input bits that hold the bank, or clear it; -1 for none. */
  readonly enable: number;
  readonly clear: number;
  readonly isOutput: boolean;
}

const INPUTS = 20;

const bank: fc.Arbitrary<BankRecipe> = fc.record({
  width: fc.integer({ min: 1, max: 40 }),
  data: fc.constantFrom('input', 'bank', 'shift', 'logic'),
  enable: fc.integer({ min: -1, max: 3 }),
  clear: fc.integer({ min: -1, max: 2 }),
  isOutput: fc.boolean(),
});

/** Circuits of register banks with enables, synchronous clears, shifts and pipeline stages. */
export function randomBanks(): fc.Arbitrary<Circuit> {
  return fc.array(bank, { minLength: 1, maxLength: 6 }).map((banks) => {
    const circuit = circuitOf(banks);
    const print = { value: () => JSON.stringify(banks), enumerable: false };
    return Object.defineProperty(circuit, fc.toStringMethod, print);
  });
}

function circuitOf(banks: readonly BankRecipe[]): Circuit {
  const builder = new CircuitBuilder();
  const clock = builder.net();
  builder.input('clk', [clock]);
  const inputs = Array.from({ length: INPUTS }, () => builder.net());
  builder.input('in', inputs, { msb: INPUTS - 1, lsb: 0 });
  let before: NetId[] = inputs;
  const names: NetId[] = [clock, ...inputs];
  banks.forEach(({ width, data, enable, clear, isOutput }, index) => {
    const outputs = Array.from({ length: width }, () => builder.net());
    outputs.forEach((output, i) => {
      const source = before[i % before.length]!;
      const other = inputs[i % INPUTS]!;
      const chosen = {
        input: () => other,
        bank: () => source,
        shift: () => (i === 0 ? source : outputs[i - 1]!),
        logic: () => builder.gate(i % 2 ? GateKind.Xor : GateKind.Nor, [source, other]),
      }[data]();
      const held =
        enable < 0 ? chosen : builder.gate(GateKind.Mux, [inputs[enable]!, output, chosen]);
      const cleared =
        clear < 0
          ? held
          : builder.gate(GateKind.And, [builder.gate(GateKind.Not, [inputs[clear]!]), held]);
      builder.register({ output, clock, data: cleared });
    });
    if (isOutput) builder.output(`out${index}`, outputs, { msb: width - 1, lsb: 0 });
    names.push(...outputs);
    before = outputs;
  });
  builder.output('last', before, { msb: before.length - 1, lsb: 0 });
  const signals = names.map((_, offset) => ({
    name: `n${offset}`,
    ...{ msb: 0, lsb: 0, isVector: false, offset, width: 1 },
  }));
  const module = builder.hierarchy.addModule({ name: 'banks', signals, bits: signals.length });
  builder.hierarchy.addScope('banks', 0, module, names);
  return builder.finish('banks');
}
