import type { Circuit } from '../circuit.js';
import { GateKind, isGate } from '../gates.js';
import { NO_NET } from '../ids.js';
import { memoryReads } from '../memoryPorts.js';
import { writePins } from '../memoryTable.js';
import { markCone } from './cones.js';
import { PinLists } from './pinLists.js';
import { statePins } from './readCounts.js';

/** The parts of a circuit that make no difference to its outputs. */
export interface UnusedParts {
  /** Nets of gates that lead to no output and to no state element, in net order. */
  readonly gates: Uint32Array;
  /** Output nets of registers and latches that no output depends on, however indirectly. */
  readonly state: Uint32Array;
  /** Numbers of memories that no output depends on. */
  readonly memories: readonly number[];
}

/** Finds them by walking back from the outputs, and from all state elements. */
export function unusedParts(circuit: Circuit): UnusedParts {
  const { registers, latches, memories, kind, netCount } = circuit;
  const leadsOn = new Uint8Array(netCount);
  for (const { nets } of circuit.outputs) markCone(circuit, nets, leadsOn);
  for (const pins of statePins(circuit)) markCone(circuit, pins, leadsOn);
  markCone(circuit, checkedNets(circuit), leadsOn);
  const gates: number[] = [];
  for (let net = 0; net < netCount; net++) {
    if (leadsOn[net] === 0 && isGate(kind[net]!)) gates.push(net);
  }
  const isSeen = observedNets(circuit);
  const isUnseen = (net: number): boolean => net === NO_NET || isSeen[net] === 0;
  const state = [...registers.output.filter(isUnseen), ...latches.output.filter(isUnseen)];
  const isHidden = (number: number): boolean =>
    memories[number]!.reads.every(({ data }) => data.every(isUnseen));
  return {
    gates: Uint32Array.from(gates),
    state: Uint32Array.from(state),
    memories: [...memories.keys()].filter(isHidden),
  };
}

// A run watches these, so that what they depend on matters.
const checkedNets = ({ checks }: Circuit): number[] => checks.map(({ when }) => when);

/** A 1 for each net that an output depends on, through gates and state elements. */
function observedNets(circuit: Circuit): Uint8Array {
  const { registers, latches, kind, faninStart, fanin, netCount } = circuit;
  const registerAt = new PinLists(netCount, registers.output);
  const latchAt = new PinLists(netCount, latches.output);
  const mark = new Uint8Array(netCount);
  const pending: number[] = [];
  const visit = (net: number): void => {
    if (net === NO_NET || mark[net] === 1) return;
    mark[net] = 1;
    pending.push(net);
  };
  for (const { nets } of circuit.outputs) nets.forEach(visit);
  checkedNets(circuit).forEach(visit);
  const visitPins = (table: Circuit['registers'] | Circuit['latches'], entry: number): void => {
    visit(table.data[entry]!);
    visit(table.set[entry]!);
    visit(table.reset[entry]!);
  };
  const reads = memoryReads(circuit);
  const isOpen = circuit.memories.map(() => true);
  const visitMemory = (memory: number): void => {
    if (isOpen[memory]) circuit.memories[memory]!.writes.flatMap(writePins).forEach(visit);
    isOpen[memory] = false;
  };
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const register = registerAt.first(net);
    const latch = latchAt.first(net);
    if (isGate(kind[net]!)) {
      for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) visit(fanin[i]!);
      if (kind[net] === GateKind.MemoryRead) visitMemory(reads.ports[reads.portOf[net]!]!.memory);
    } else if (register >= 0) {
      visitPins(registers, register);
      visit(registers.clock[register]!);
    } else if (latch >= 0) {
      visitPins(latches, latch);
      visit(latches.enable[latch]!);
    }
  }
  return mark;
}
