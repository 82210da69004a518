import { type NetId, NO_NET } from './ids.js';
import {
  addressBits,
  depthOf,
  type Memory,
  type MemoryShape,
  type ReadPort,
  type WritePort,
} from './memory.js';

/** What `CircuitBuilder.writeMemory` takes; see `WritePort` for the meaning of the fields. */
export interface WritePins {
  readonly clock: NetId;
  readonly edge?: number;
  readonly enable?: NetId;
  readonly address: readonly NetId[];
  readonly data: readonly NetId[];
  readonly mask?: readonly NetId[];
}

interface OpenMemory {
  shape: MemoryShape;
  readonly reads: ReadPort[];
  readonly writes: WritePort[];
}

/** The memories of a circuit that is being built. */
export class MemoryTable {
  readonly #memories: OpenMemory[] = [];

  /** Adds a memory without ports; returns its number. */
  add(shape: MemoryShape): number {
    return this.#memories.push({ shape, reads: [], writes: [] }) - 1;
  }

  /** Gives a memory other contents at power-up. */
  setContents(memory: number, initial: Uint8Array | undefined): void {
    const open = this.#memories[memory]!;
    open.shape = { ...open.shape, initial };
  }

  widthOf(memory: number): number {
    return this.#memories[memory]!.shape.width;
  }

  /** Adds a port whose data nets are driven already. Throws RangeError for a wrong number of nets. */
  read(memory: number, address: readonly NetId[], data: readonly NetId[]): void {
    const { shape, reads } = this.#memories[memory]!;
    checkCount(shape, 'address nets', address.length, addressBits(shape.indices));
    checkCount(shape, 'data nets', data.length, shape.width);
    reads.push({ address: Uint32Array.from(address), data: Uint32Array.from(data) });
  }

  /** Adds a port that writes after those before. Throws RangeError for a wrong number of nets. */
  write(memory: number, pins: WritePins, edge: number): void {
    const { shape, writes } = this.#memories[memory]!;
    const { clock, enable = NO_NET, address, data, mask } = pins;
    checkCount(shape, 'address nets', address.length, addressBits(shape.indices));
    checkCount(shape, 'data nets', data.length, shape.width);
    if (mask !== undefined) checkCount(shape, 'mask nets', mask.length, shape.width);
    writes.push({
      clock,
      edge,
      enable,
      address: Uint32Array.from(address),
      data: Uint32Array.from(data),
      mask: mask && Uint32Array.from(mask),
    });
  }

  /** Lets the ports that drive certain nets drive others. */
  moveOutputs(moved: ReadonlyMap<number, NetId>): void {
    for (const { reads } of this.#memories) {
      for (const { data } of reads) {
        data.forEach((net, bit) => {
          data[bit] = moved.get(net) ?? net;
        });
      }
    }
  }

  /** Sets the marks of all nets that writing reads; addresses of read ports are fan-in. */
  markReads(isRead: Uint8Array): void {
    for (const { writes } of this.#memories) {
      for (const port of writes) for (const net of writePins(port)) isRead[net] = 1;
    }
  }

  take(): Memory[] {
    return this.#memories.map(({ shape, reads, writes }) => ({
      ...shape,
      depth: depthOf(shape.indices),
      reads,
      writes,
    }));
  }
}

/** The nets that a write port reads, its clock among them; some may stand there several times. */
export function writePins({ clock, enable, address, data, mask }: WritePort): number[] {
  return [clock, ...(enable === NO_NET ? [] : [enable]), ...address, ...data, ...(mask ?? [])];
}

/** The same of what a write port is made of. */
export function pinNets({ clock, enable, address, data, mask }: WritePins): NetId[] {
  const all = [clock, enable ?? NO_NET, ...address, ...data, ...(mask ?? [])];
  return all.filter((net) => net !== NO_NET);
}

function checkCount({ name }: MemoryShape, what: string, got: number, expected: number): void {
  if (got === expected) return;
  throw new RangeError(`a port of memory ${name} takes ${expected} ${what}, got ${got}`);
}
