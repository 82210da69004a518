import type { Circuit } from './circuit.js';
import type { ReadPort, WritePort } from './memory.js';
import { writePins } from './memoryTable.js';

/** A port and the memory, by its number, that it belongs to. */
export interface PortOf<P> {
  readonly memory: number;
  readonly port: P;
}

/** The read ports of all memories, and the nets that they drive. */
export interface MemoryReads {
  readonly ports: readonly PortOf<ReadPort>[];
  /** Per net of kind `MemoryRead`: index into `ports`; meaningless for other nets. */
  readonly portOf: Uint32Array;
  /** Per net of kind `MemoryRead`: bit of the word, from the right. */
  readonly bitOf: Uint32Array;
}

const knownReads = new WeakMap<Circuit, MemoryReads>();

/** The read ports of a circuit; collected once for each circuit. */
export function memoryReads(circuit: Circuit): MemoryReads {
  const reads = knownReads.get(circuit) ?? collectReads(circuit);
  knownReads.set(circuit, reads);
  return reads;
}

function collectReads({ memories, netCount }: Circuit): MemoryReads {
  const ports = memories.flatMap(({ reads }, memory) => reads.map((port) => ({ memory, port })));
  const count = ports.length === 0 ? 0 : netCount;
  const portOf = new Uint32Array(count);
  const bitOf = new Uint32Array(count);
  for (const [index, { port }] of ports.entries()) {
    for (const [bit, net] of port.data.entries()) {
      portOf[net] = index;
      bitOf[net] = bit;
    }
  }
  return { ports, portOf, bitOf };
}

/** The write ports of all memories, in the order in which they write. */
export const memoryWrites = ({ memories }: Circuit): PortOf<WritePort>[] =>
  memories.flatMap(({ writes }, memory) => writes.map((port) => ({ memory, port })));

/** All nets that the write ports of memories read, clocks included. */
export const memoryPins = ({ memories }: Pick<Circuit, 'memories'>): Uint32Array =>
  Uint32Array.from(memories.flatMap(({ writes }) => writes.flatMap(writePins)));

/** The pins at which clock edges act: those of registers, and then those of write ports. */
export interface ClockPins {
  readonly clock: Uint32Array;
  /** An `Edge` for each. */
  readonly edge: Uint8Array;
}

const knownPins = new WeakMap<Circuit, ClockPins>();

/**
 * All clock pins; the n-th write port of `memoryWrites` comes n places behind the registers.
 * Collected once for each circuit.
 */
export function clockPins(circuit: Circuit): ClockPins {
  if (circuit.memories.length === 0) return circuit.registers;
  const pins = knownPins.get(circuit) ?? collectPins(circuit);
  knownPins.set(circuit, pins);
  return pins;
}

function collectPins(circuit: Circuit): ClockPins {
  const { registers } = circuit;
  const writes = memoryWrites(circuit);
  const clock = new Uint32Array(registers.count + writes.length);
  const edge = new Uint8Array(clock.length);
  clock.set(registers.clock);
  edge.set(registers.edge);
  for (const [i, { port }] of writes.entries()) {
    clock[registers.count + i] = port.clock;
    edge[registers.count + i] = port.edge;
  }
  return { clock, edge };
}
