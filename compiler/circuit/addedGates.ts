import type { Circuit } from './circuit.js';
import { GateKind } from './gates.js';
import { GrowableUint8, GrowableUint32 } from './growable.js';
import { type NetId, netId } from './ids.js';
import { shareLoops } from './loops.js';
import type { ReadPort } from './memory.js';

/**
 * Gates, and read ports of memories, that look at a circuit: nothing of it reads them, so that it
 * does what it did before.
 */
export class AddedGates {
  readonly looksAt: 'twoValues' | 'threeValues';
  readonly #circuit: Circuit;
  readonly #kind = new GrowableUint8(16);
  readonly #faninStart = new GrowableUint32(16);
  readonly #fanin = new GrowableUint32(32);
  readonly #constants = new Map<GateKind, NetId>();
  readonly #reads: { readonly memory: number; readonly port: ReadPort }[] = [];
  readonly #words = new Map<string, readonly NetId[]>();

  constructor(circuit: Circuit, threeValued: boolean) {
    this.#circuit = circuit;
    this.looksAt = threeValued ? 'threeValues' : 'twoValues';
  }

  /** The `GateKind` that drives a net. With two values, nets of the circuit that are x are 0. */
  kindOf(net: NetId): number {
    const { kind, netCount } = this.#circuit;
    if (net >= netCount) return this.#kind.get(net - netCount);
    const own = kind[net]!;
    const isZero = own === GateKind.Unknown && this.looksAt === 'twoValues';
    return isZero ? GateKind.Zero : own;
  }

  /** A new net driven by a gate; one and the same net for each constant. */
  gate(kind: GateKind, fanin: readonly NetId[]): NetId {
    if (kind > GateKind.Unknown) return this.#add(kind, fanin);
    const net = this.#constants.get(kind) ?? this.#add(kind, fanin);
    this.#constants.set(kind, net);
    return net;
  }

  /** The nets of the word of a memory at an address; the same for the same address. */
  readMemory(memory: number, address: readonly NetId[]): readonly NetId[] {
    const key = `${memory} ${address.join()}`;
    const known = this.#words.get(key);
    if (known !== undefined) return known;
    const { width } = this.#circuit.memories[memory]!;
    const data = Array.from({ length: width }, () => this.#add(GateKind.MemoryRead, address));
    const port = { address: Uint32Array.from(address), data: Uint32Array.from(data) };
    this.#reads.push({ memory, port });
    this.#words.set(key, data);
    return data;
  }

  /** The circuit with what has been added, its nets numbered as before. */
  finish(): Circuit {
    const { netCount, faninStart, fanin, memories, ...rest } = this.#circuit;
    const added = this.#kind.length;
    const start = this.#faninStart.take().map((at) => at + fanin.length);
    const all: Circuit = {
      ...rest,
      netCount: netCount + added,
      kind: joined(Uint8Array, rest.kind, this.#kind.take()),
      faninStart: joined(
        Uint32Array,
        faninStart.subarray(0, netCount),
        start,
        Uint32Array.of(fanin.length + this.#fanin.length),
      ),
      fanin: joined(Uint32Array, fanin, this.#fanin.take()),
      memories: memories.map((memory, number) => ({
        ...memory,
        reads: [
          ...memory.reads,
          ...this.#reads.flatMap((read) => (read.memory === number ? [read.port] : [])),
        ],
      })),
      originSource: joined(Uint16Array, rest.originSource, new Uint16Array(added)),
      originOffset: joined(Uint32Array, rest.originOffset, new Uint32Array(added)),
    };
    shareLoops(this.#circuit, all);
    return all;
  }

  #add(kind: GateKind, fanin: readonly NetId[]): NetId {
    this.#kind.push(kind);
    this.#faninStart.push(this.#fanin.length);
    for (const source of fanin) this.#fanin.push(source);
    return netId(this.#circuit.netCount + this.#kind.length - 1);
  }
}

function joined<T extends Uint8Array | Uint16Array | Uint32Array>(
  type: new (length: number) => T,
  ...parts: readonly T[]
): T {
  const whole = new type(parts.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}
