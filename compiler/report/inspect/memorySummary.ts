import type { ClockRoots } from '../../circuit/analyses/clockRoots.js';
import type { Circuit } from '../../circuit/circuit.js';
import { memoryWrites } from '../../circuit/memoryPorts.js';
import type { Design } from '../../compile.js';
import type { Span } from '../../diagnostics/source.js';

/** A memory and its ports. */
export interface MemorySummary {
  readonly name: string;
  readonly words: number;
  readonly width: number;
  /** Ports by which logic reads words at any time. */
  readonly readPorts: number;
  /** Ports by which clock edges write words. */
  readonly writePorts: number;
  /** Clock ports on which it is written. */
  readonly clocks: readonly string[];
  /** Whether the netlist gives any of its words a value at power-up. */
  readonly hasInitial: boolean;
}

/** Tells of each memory of a circuit, in its order. */
export function memorySummaries({ circuit, clocks }: Design, roots: ClockRoots): MemorySummary[] {
  const written = circuit.memories.map(() => new Set<number>());
  for (const [port, { memory }] of memoryWrites(circuit).entries()) {
    const ports = roots.sets.members(roots.writes.roots[port]!);
    for (const clock of ports) written[memory]!.add(clock);
  }
  return circuit.memories.map(({ name, width, depth, reads, writes, initial }, number) => ({
    ...{ name, words: depth, width, readPorts: reads.length, writePorts: writes.length },
    clocks: [...written[number]!].sort((p, q) => p - q).map((port) => clocks.ports[port]!.name),
    hasInitial: initial !== undefined,
  }));
}

/** Where a memory is declared. */
export function memorySpan(circuit: Circuit, number: number): Span | undefined {
  const { sourceIndex, offset } = circuit.memories[number]!;
  const source = circuit.sources[sourceIndex];
  return source && { source, start: offset, end: offset };
}
