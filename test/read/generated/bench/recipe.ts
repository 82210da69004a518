import fc from 'fast-check';
import { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import type { NetId } from '../../../../compiler/circuit/ids.js';

/** A gate, a constant or a flip-flop; its inputs are taken modulo the nets there are. */
export interface BenchGate {
  readonly kind: GateKind;
  readonly inputs: readonly number[];
}

/** A circuit as the ISCAS'89 text form can tell it. */
export interface BenchRecipe {
  readonly inputs: number;
  /** Style of each name, in the order of `netsOf`. */
  readonly styles: readonly number[];
  readonly registers: readonly number[];
  readonly gates: readonly BenchGate[];
  readonly outputs: readonly number[];
}

const { Zero, One, Buf, Not, And, Nand, Or, Nor, Xor, Xnor } = GateKind;

const net = fc.nat(60);
const gate: fc.Arbitrary<BenchGate> = fc.oneof(
  fc.record({ kind: fc.constantFrom(Buf, Not), inputs: fc.tuple(net) }),
  fc.record({
    kind: fc.constantFrom(And, Nand, Or, Nor, Xor, Xnor),
    inputs: fc.array(net, { minLength: 1, maxLength: 5 }),
  }),
  fc.record({ kind: fc.constantFrom(Zero, One), inputs: fc.constant([]) }),
);

/** Random circuits without loops but through flip-flops. */
export const benchRecipe: fc.Arbitrary<BenchRecipe> = fc.record({
  inputs: fc.integer({ min: 1, max: 4 }),
  styles: fc.array(fc.nat(7), { minLength: 40, maxLength: 40 }),
  registers: fc.array(net, { maxLength: 4 }),
  gates: fc.array(gate, { maxLength: 16 }),
  outputs: fc.uniqueArray(net, { minLength: 1, maxLength: 4 }),
});

/** A net: what drives it, and the nets that it reads. */
export interface BenchNet {
  readonly name: string;
  readonly kind: GateKind;
  readonly inputs: readonly number[];
}

/** All nets: inputs, flip-flops and gates, each of which reads none behind it. */
export function netsOf({ inputs, styles, registers, gates }: BenchRecipe): BenchNet[] {
  const total = inputs + registers.length + gates.length;
  const nets: BenchNet[] = [];
  const add = (kind: GateKind, reads: readonly number[]): void => {
    const number = nets.length;
    nets.push({ name: nameOf(number, styles[number % styles.length]!), kind, inputs: reads });
  };
  for (let i = 0; i < inputs; i++) add(GateKind.Input, []);
  for (const data of registers) add(GateKind.Register, [data % total]);
  for (const { kind, inputs: reads } of gates) {
    const before = nets.length;
    add(
      kind,
      reads.map((read) => read % before),
    );
  }
  return nets;
}

function nameOf(number: number, style: number): string {
  const styles = [`n${number}`, `G${number}gat`, `${number}`, `u${number}/x[3]`, `$${number}\\y`];
  return [...styles, `INPUT${number}`, `and_${number}`, `ä"${number};`][style]!;
}

/** The nets that are outputs, each once. */
export const outputsOf = (recipe: BenchRecipe, nets: readonly BenchNet[]): BenchNet[] => [
  ...new Set(recipe.outputs.map((output) => nets[output % nets.length]!)),
];

/** Builds the circuit without any text in between. */
export function buildBench(recipe: BenchRecipe): Circuit {
  const nets = netsOf(recipe);
  const builder = new CircuitBuilder();
  const ids = nets.map(() => builder.net());
  const clock: NetId[] = [];
  if (recipe.registers.length > 0) {
    clock.push(builder.net());
    builder.input('clock', clock);
  }
  for (const [i, { name, kind, inputs }] of nets.entries()) {
    const output = ids[i]!;
    const reads = inputs.map((input) => ids[input]!);
    if (kind === GateKind.Input) builder.input(name, [output]);
    else if (kind !== GateKind.Register) builder.drive(output, kind, reads);
    else builder.register({ output, clock: clock[0]!, data: reads[0]! });
  }
  for (const net of outputsOf(recipe, nets)) {
    builder.output(net.name, [ids[nets.indexOf(net)]!]);
  }
  const signals = nets.map(({ name }, offset) => ({
    ...{ name, msb: 0, lsb: 0, isVector: false, offset, width: 1 },
  }));
  const { hierarchy } = builder;
  const module = hierarchy.addModule({ name: 'c', signals, bits: signals.length });
  hierarchy.addScope('c', 0, module, ids);
  return builder.finish('c');
}
