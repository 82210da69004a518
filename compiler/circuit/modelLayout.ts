import { layRow, type ModelLayout, type PortLayout } from '../../runtime/layout.js';
import type { Circuit, Port } from './circuit.js';
import type { ClockPorts } from './clockPorts.js';
import { netName, primaryNames } from './hierarchy.js';
import { NO_NET } from './ids.js';
import { loopsOf } from './loops.js';

/**
 * The runtime's view of a circuit: rows of data inputs and of outputs, and the names of its state.
 *
 * An input port of which every bit is a clock has no place in a row. One of which some bits are
 * keeps its width; the places of those bits are ignored.
 */
export function modelLayout(
  circuit: Circuit,
  clocks: ClockPorts,
  threeValued: boolean,
): ModelLayout {
  const isClock = clockNets(circuit, clocks);
  const dataPorts = circuit.inputs.filter((port) => port.nets.some((net) => !isClock[net]));
  const names = primaryNames(circuit.hierarchy, circuit.netCount);
  return {
    name: circuit.name,
    threeValued,
    clocks: clocks.ports.map((port) => port.name),
    inputs: layRow(dataPorts.map(portShape)),
    outputs: layRow(circuit.outputs.map(portShape)),
    stateNames: Array.from(stateNets(circuit), (net) => netName(circuit.hierarchy, names, net)),
    memories: circuit.memories.map(({ name, width, depth }) => ({ name, width, depth })),
  };
}

/** The net behind each bit of an input row; `NO_NET` for a bit that is a clock. */
export function inputRowNets(circuit: Circuit, clocks: ClockPorts): Uint32Array {
  const isClock = clockNets(circuit, clocks);
  const nets: number[] = [];
  for (const port of circuit.inputs) {
    if (port.nets.every((net) => isClock[net])) continue;
    for (const net of port.nets) nets.push(isClock[net] ? NO_NET : net);
  }
  return Uint32Array.from(nets);
}

/** The net behind each bit of an output row. */
export function outputRowNets(circuit: Circuit): Uint32Array {
  return Uint32Array.from(circuit.outputs.flatMap((port) => Array.from(port.nets)));
}

/** The output net of each state element, in the order of `ModelLayout.stateNames`. */
export function stateNets(circuit: Circuit): Uint32Array {
  const { registers, latches } = circuit;
  const { keptNets } = loopsOf(circuit);
  const nets = new Uint32Array(registers.count + latches.count + keptNets.length);
  nets.set(registers.output);
  nets.set(latches.output, registers.count);
  nets.set(keptNets, registers.count + latches.count);
  return nets;
}

function clockNets(circuit: Circuit, clocks: ClockPorts): Uint8Array {
  const isClock = new Uint8Array(circuit.netCount);
  for (const { net } of clocks.ports) isClock[net] = 1;
  return isClock;
}

const portShape = (port: Port): Omit<PortLayout, 'offset'> => ({
  name: port.name,
  width: port.nets.length,
  msb: port.msb,
  lsb: port.lsb,
  isVector: port.isVector,
});
