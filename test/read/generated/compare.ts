import type { Circuit, Port } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { netName, primaryNames } from '../../../compiler/circuit/hierarchy.js';
import { modelLayout } from '../../../compiler/circuit/modelLayout.js';
import { powerUpState } from '../../../compiler/circuit/powerUp.js';
import { ReferenceEngine } from '../../../compiler/interpret/reference/referenceEngine.js';
import { courseOf } from '../../support/engines.js';
import { firstDifference, randomRows } from '../../support/responses.js';

/** What two circuits of one design must have in common. */
export interface Behaviour {
  readonly ports: readonly string[];
  /** Full names of the registers, sorted, and of the latches. */
  readonly registers: readonly string[];
  readonly latches: readonly string[];
  readonly circuit: Circuit;
  readonly response: Uint32Array;
}

/** Runs a circuit on random rows and tells what can be seen of it. */
export function behaviourOf(circuit: Circuit, seed: number, cycles: number): Behaviour {
  const clocks = findClockPorts(circuit);
  const layout = modelLayout(circuit, clocks, false);
  const engine = new ReferenceEngine(circuit, { clocks, layout });
  const rows = randomRows(layout, seed, cycles);
  const { response } = courseOf(engine, powerUpState(circuit, 'zero'), rows, cycles);
  const names = primaryNames(circuit.hierarchy, circuit.netCount);
  const sorted = (nets: Uint32Array): string[] =>
    Array.from(nets, (net) => netName(circuit.hierarchy, names, net))
      .filter((name) => !isOfSpelling.test(name))
      .sort();
  return {
    ports: [...circuit.inputs.map(portText), ...circuit.outputs.map(portText)],
    registers: sorted(circuit.registers.output),
    latches: sorted(circuit.latches.output),
    circuit,
    response,
  };
}

// A variable inside of a clocked block keeps its value too, although the design knows nothing of it.
const isOfSpelling = /(^|\.)z_/;

const portText = ({ name, msb, lsb, isVector, nets }: Port): string =>
  isVector ? `${name}[${msb}:${lsb}] ${nets.length}` : name;

/** How one circuit differs from another one of the same design; undefined if it does not. */
export function differenceOf(actual: Behaviour, expected: Behaviour): string | undefined {
  for (const part of ['ports', 'registers', 'latches'] as const) {
    const [is, should] = [actual[part], expected[part]].map((list) => list.join(' '));
    if (is !== should) return `${part}: ${is}, expected ${should}`;
  }
  const clocks = findClockPorts(actual.circuit);
  const layout = modelLayout(actual.circuit, clocks, false);
  return firstDifference(layout, actual.response, expected.response);
}
