import type { Circuit } from '../circuit.js';
import { GateKind, isGate } from '../gates.js';
import { NO_NET } from '../ids.js';
import { memoryReads, memoryWrites } from '../memoryPorts.js';
import { gateReaders } from '../readers.js';
import type { ClockRoots } from './clockRoots.js';
import { PinLists } from './pinLists.js';
import { NO_ROOTS } from './rootSets.js';

/** A path to a register from a register of another clock, or from a memory that one writes. */
export interface Crossing {
  /** The register, or -1 where it is a memory. */
  readonly from: number;
  readonly to: number;
  /** Number of the memory. */
  readonly memory?: number;
}

/**
 * Registers that capture values from registers, or memories, on clock ports that they do not hang on
 * themselves.
 *
 * Values pass gates, and latches from data to output. A register on a divided or gated clock hangs
 * on the port which that comes from; one on none is left out.
 */
export class Crossings {
  /** The registers that capture such values, in ascending order. */
  readonly captures: Uint32Array;
  readonly #circuit: Circuit;
  readonly #roots: ClockRoots;
  /** Per net: clock ports of the registers that its value comes from. */
  readonly #from: Uint32Array;
  /** Per memory: clock ports on which it is written. */
  readonly #written: readonly number[];

  constructor(circuit: Circuit, roots: ClockRoots) {
    this.#circuit = circuit;
    this.#roots = roots;
    const own = roots.registers.roots;
    const all = [...own, ...roots.writes.roots];
    const isSingle = new Set(all.filter((set) => set !== NO_ROOTS)).size < 2;
    this.#written = writtenOn(circuit, roots);
    this.#from = isSingle
      ? new Uint32Array(circuit.netCount)
      : spread(circuit, roots, this.#written);
    this.captures = Uint32Array.from(own.keys()).filter((r) =>
      this.#isForeign(r, circuit.registers.data[r]!),
    );
  }

  /** One of the crossings into a register of `captures`. */
  into(register: number): Crossing {
    const { kind, faninStart, fanin, registers, latches } = this.#circuit;
    const registerAt = new PinLists(this.#circuit.netCount, registers.output);
    const latchAt = new PinLists(this.#circuit.netCount, latches.output);
    const reads = memoryReads(this.#circuit);
    const seen = new Set<number>();
    const pending: number[] = [];
    const visit = (net: number): void => {
      if (net === NO_NET || seen.has(net) || !this.#isForeign(register, net)) return;
      seen.add(net);
      pending.push(net);
    };
    visit(registers.data[register]!);
    for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
      const from = registerAt.first(net);
      if (from >= 0) return { from, to: register };
      if (kind[net] === GateKind.MemoryRead) {
        const { memory } = reads.ports[reads.portOf[net]!]!;
        if (!this.#isWithin(register, this.#written[memory]!))
          return { from, to: register, memory };
      }
      if (latchAt.first(net) >= 0) visit(latches.data[latchAt.first(net)]!);
      if (!isGate(kind[net]!)) continue;
      for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) visit(fanin[i]!);
    }
    throw new Error(`register ${register} captures nothing from another clock`);
  }

  #isForeign(register: number, net: number): boolean {
    return !this.#isWithin(register, this.#from[net]!);
  }

  #isWithin(register: number, from: number): boolean {
    const { registers, sets } = this.#roots;
    const own = registers.roots[register]!;
    return own === NO_ROOTS || sets.isWithin(from, own);
  }
}

function writtenOn(circuit: Circuit, { sets, writes }: ClockRoots): number[] {
  const written = circuit.memories.map(() => NO_ROOTS);
  for (const [port, { memory }] of memoryWrites(circuit).entries()) {
    written[memory] = sets.union(written[memory]!, writes.roots[port]!);
  }
  return written;
}

function spread(
  circuit: Circuit,
  { sets, registers: { roots } }: ClockRoots,
  written: readonly number[],
): Uint32Array {
  const { start, reader } = gateReaders(circuit);
  const { registers, latches, netCount } = circuit;
  const from = new Uint32Array(netCount);
  const fed = new PinLists(netCount, latches.data);
  const pending: number[] = [];
  const raise = (net: number, set: number): void => {
    const union = sets.union(from[net]!, set);
    if (union === from[net]) return;
    from[net] = union;
    pending.push(net);
  };
  registers.output.forEach((net, r) => {
    raise(net, roots[r]!);
  });
  for (const { memory, port } of memoryReads(circuit).ports) {
    for (const net of port.data) if (net !== NO_NET) raise(net, written[memory]!);
  }
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const set = from[net]!;
    for (let i = start[net]!; i < start[net + 1]!; i++) raise(reader[i]!, set);
    for (let l = fed.first(net); l >= 0; l = fed.next(l)) raise(latches.output[l]!, set);
  }
  return from;
}
