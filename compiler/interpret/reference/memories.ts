import {
  checkMemoryState,
  type MemoryShapes,
  memoryStateBytes,
  wordBytes,
} from '../../../runtime/memoryState.js';
import type { Circuit } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import type { WritePort } from '../../circuit/memory.js';
import { type Memory, wordAt } from '../../circuit/memory.js';
import {
  type MemoryReads,
  memoryReads,
  memoryWrites,
  type PortOf,
} from '../../circuit/memoryPorts.js';
import { X } from '../../circuit/values.js';
import { AND, choose } from './values.js';

/** What a write port does at an edge, with the values of before it. */
export interface CapturedWrite {
  /** Number of the port among all write ports. */
  readonly index: number;
  readonly enable: number;
  readonly address: Uint8Array;
  readonly data: Uint8Array;
  readonly mask: Uint8Array | undefined;
}

/** The contents of a circuit's memories, a byte for each bit: 0, 1 or 2 for x. */
export class ReferenceMemories {
  readonly writes: readonly PortOf<WritePort>[];
  readonly #layout: MemoryShapes;
  readonly #memories: readonly Memory[];
  readonly #reads: MemoryReads;
  readonly #bits: readonly Uint8Array[];
  readonly #value: Uint8Array;

  /** Addresses of read ports are looked up in `value` at each call. */
  constructor(circuit: Circuit, threeValued: boolean, value: Uint8Array) {
    this.#layout = { memories: circuit.memories, threeValued };
    this.#memories = circuit.memories;
    this.#reads = memoryReads(circuit);
    this.writes = memoryWrites(circuit);
    this.#bits = circuit.memories.map(({ width, depth }) => new Uint8Array(width * depth));
    this.#value = value;
  }

  /** The nets that the read ports of a memory drive. */
  netsOf(memory: number): number[] {
    const { reads } = this.#memories[memory]!;
    return reads.flatMap(({ data }) => Array.from(data).filter((net) => net !== NO_NET));
  }

  /** The value that a net which a read port drives has now. */
  read(net: number): number {
    const { ports, portOf, bitOf } = this.#reads;
    const { memory, port } = ports[portOf[net]!]!;
    const { width, indices } = this.#memories[memory]!;
    const nothing = this.#layout.threeValued ? X : 0;
    const address = port.address;
    for (const each of address) if (this.#value[each] === X) return nothing;
    const word = wordAt(indices, (place, bits) =>
      numberOf(bits, (bit) => this.#value[address[place + bit]!]!),
    );
    return word < 0 ? nothing : this.#bits[memory]![word * width + bitOf[net]!]!;
  }

  /** What a port is about to write; `fired` is 1 at an edge, x where there may have been one. */
  capture(index: number, fired: number, valueAt: (net: number) => number): CapturedWrite {
    const { enable, address, data, mask } = this.writes[index]!.port;
    const column = (nets: Uint32Array): Uint8Array => Uint8Array.from(nets, valueAt);
    return {
      index,
      enable: AND[fired * 3 + (enable === NO_NET ? 1 : valueAt(enable))]!,
      address: column(address),
      data: column(data),
      mask: mask && column(mask),
    };
  }

  /**
   * Writes in the order of the ports; returns the memories that this changed. With `endless`, what
   * would change becomes x.
   */
  apply(writes: readonly CapturedWrite[], endless: boolean): ReadonlySet<number> {
    const changed = new Set<number>();
    for (let memory = 0; memory < this.#bits.length; memory++) {
      const before = new Map<number, number>();
      const own = writes.filter(({ index }) => this.writes[index]!.memory === memory);
      for (const write of own.sort((a, b) => a.index - b.index)) this.#apply(memory, write, before);
      const bits = this.#bits[memory]!;
      for (const [bit, old] of before) {
        if (bits[bit] === old) continue;
        if (endless) bits[bit] = X;
        if (bits[bit] !== old) changed.add(memory);
      }
    }
    return changed;
  }

  #apply(
    memory: number,
    { enable, address, data, mask }: CapturedWrite,
    before: Map<number, number>,
  ): void {
    if (enable === 0) return;
    const { indices } = this.#memories[memory]!;
    const bits = this.#bits[memory]!;
    const unknown = Array.from(address.keys()).filter((place) => address[place] === X);
    const given = address.slice();
    const surely = AND[enable * 3 + (unknown.length > 0 ? X : 1)]!;
    // Every word that the address may mean; of a known one, just that.
    for (let choice = 0; choice < 2 ** unknown.length; choice++) {
      for (const [i, place] of unknown.entries()) given[place] = Math.floor(choice / 2 ** i) % 2;
      const word = wordAt(indices, (place, count) => numberOf(count, (bit) => given[place + bit]!));
      if (word < 0) continue;
      for (const [bit, value] of data.entries()) {
        const at = word * data.length + bit;
        const old = bits[at]!;
        bits[at] = choose(AND[surely * 3 + (mask?.[bit] ?? 1)]!, old, value);
        if (bits[at] !== old && !before.has(at)) before.set(at, old);
      }
    }
  }

  /** The contents as `Engine.memoryState` gives them. */
  bytes(): Uint8Array {
    const { threeValued, memories } = this.#layout;
    const bytes = new Uint8Array(memoryStateBytes(this.#layout));
    let at = 0;
    for (const [index, memory] of memories.entries()) {
      const { width, depth } = memory;
      const bits = this.#bits[index]!;
      const step = wordBytes(memory, threeValued);
      for (let word = 0; word < depth; word++, at += step) {
        for (let bit = 0; bit < width; bit++) {
          const value = bits[word * width + bit]!;
          const group = value === X ? step >> 1 : 0;
          if (value !== 0) bytes[at + group + (bit >>> 3)]! |= 1 << (bit & 7);
        }
      }
    }
    return bytes;
  }

  /** Sets the contents as `Engine.loadMemory` does. */
  load(bytes: Uint8Array): void {
    checkMemoryState(this.#layout, bytes);
    const { threeValued, memories } = this.#layout;
    let at = 0;
    for (const [index, memory] of memories.entries()) {
      const { width, depth } = memory;
      const bits = this.#bits[index]!;
      const step = wordBytes(memory, threeValued);
      for (let word = 0; word < depth; word++, at += step) {
        for (let bit = 0; bit < width; bit++) {
          const one = (bytes[at + (bit >>> 3)]! >>> (bit & 7)) & 1;
          const isX = threeValued && (bytes[at + (step >> 1) + (bit >>> 3)]! >>> (bit & 7)) & 1;
          bits[word * width + bit] = isX ? X : one;
        }
      }
    }
  }
}

function numberOf(bits: number, valueAt: (bit: number) => number): number {
  let value = 0;
  for (let bit = bits - 1; bit >= 0; bit--) value = value * 2 + valueAt(bit);
  return value;
}
