import fc from 'fast-check';
import type { Circuit } from '../../compiler/circuit/circuit.js';
import { Edge, Priority } from '../../compiler/circuit/circuit.js';
import { type SmallRegister, smallCircuit } from '../support/smallCircuit.js';

const REGISTERS = 4;
const sources = ['a', 'b', 'q0', 'q1', 'q2', 'q3'];
const logic = ['g0', 'g1', 'g2', 'g3'];
const clocks = ['c0', 'c1', 'c2'];

const gate = (kinds: readonly string[], nets: readonly string[]) =>
  fc
    .tuple(fc.constantFrom(...kinds), fc.constantFrom(...nets), fc.constantFrom(...nets))
    .map((parts) => parts.join(' '));

const register = fc.record(
  {
    clock: fc.constantFrom('clk', ...clocks, ...clocks, ...sources),
    data: fc.constantFrom(...sources, ...logic),
    edge: fc.constantFrom(Edge.Rising, Edge.Falling),
    priority: fc.constantFrom(Priority.ResetWins, Priority.SetWins),
    set: fc.constantFrom('a', ...logic),
    reset: fc.constantFrom('b', ...logic),
  },
  { requiredKeys: ['clock', 'data', 'edge', 'priority'] },
);

const clockGate = (net: string) =>
  fc
    .tuple(fc.constantFrom('and', 'or', 'xor', 'nand'), fc.constantFrom(...sources, ...logic))
    .map(([kind, other]): [string, string] => [net, `${kind} clk ${other}`]);

/**
 * Circuits of four registers of which most are clocked by gates of the clock, of inputs and of one
 * another, and some set or reset by such gates; for fast-check. All registers are outputs.
 */
export const derivedClocks: fc.Arbitrary<Circuit> = fc
  .record({
    gates: fc.tuple(...logic.map(() => gate(['and', 'or', 'xor', 'nor', 'xnor'], sources))),
    clocks: fc.tuple(...clocks.map(clockGate)),
    registers: fc.tuple(...Array.from({ length: REGISTERS }, () => register)),
  })
  .map((made) => {
    const gates = Object.fromEntries(logic.map((net, i) => [net, made.gates[i]!]));
    const registers = made.registers.map((pins, i) => [`q${i}`, pins] as [string, SmallRegister]);
    const circuit = smallCircuit({
      inputs: ['clk', 'a', 'b'],
      outputs: ['q0', 'q1', 'q2', 'q3'],
      gates: { ...gates, ...Object.fromEntries(made.clocks) },
      // One on the port itself, so that it is known as the clock.
      registers: { tick: { clock: 'clk', data: 'a' }, ...Object.fromEntries(registers) },
    });
    const print = { value: () => JSON.stringify(made), enumerable: false };
    return Object.defineProperty(circuit, fc.toStringMethod, print);
  });
