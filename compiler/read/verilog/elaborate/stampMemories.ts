import type { CircuitBuilder } from '../../../circuit/builder.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import { FarContents, type InitialContents } from '../initialContents.js';
import { DROPPED, type RecordedMemory } from './recording.js';
import type { Template } from './template.js';

/** A memory of one instance, which other instances may name too. */
export class PlacedMemory {
  #number: number | undefined;
  readonly #waiting: ((number: number) => void)[] = [];
  #own: InitialContents | undefined;
  readonly #far: { readonly depth: number; readonly contents: FarContents }[] = [];

  /** Gives it its number in the circuit, and adds the ports that have been waiting for that. */
  place(number: number, own: InitialContents): void {
    this.#number = number;
    this.#own = own;
    for (const add of this.#waiting) add(number);
    this.#waiting.length = 0;
  }

  /** Adds ports, as soon as the memory has its number. */
  addPorts(add: (number: number) => void): void {
    if (this.#number === undefined) this.#waiting.push(add);
    else add(this.#number);
  }

  /** Takes note of what a module so deep in the hierarchy says of its contents. */
  tell(depth: number, contents: FarContents): void {
    if (contents.isEmpty) return;
    this.#far.push({ depth, contents });
  }

  /**
   * Lets the circuit have its contents where other modules have told of them. They win over its own
   * module; of several the outermost one wins, at one depth the last.
   */
  fill(builder: CircuitBuilder): void {
    if (this.#far.length === 0) return;
    const contents = this.#own!.copy();
    this.#far.sort((a, b) => b.depth - a.depth);
    for (const told of this.#far) told.contents.layOver(contents);
    builder.setContents(this.#number!, contents.bytes);
  }
}

/** The part of an instance that its memories need. */
interface Instance {
  readonly template: Template;
  readonly nets: Uint32Array;
  readonly scopes: readonly number[];
  readonly hasOrigin: boolean;
  readonly source: number;
  readonly offset: number;
  memories: readonly PlacedMemory[];
}

const none: readonly PlacedMemory[] = [];

/**
 * Writes the memories of instances into a circuit. A module may name memories of modules around it
 * and inside it, which are stamped before or after it.
 */
export class MemoryStamper {
  readonly #builder: CircuitBuilder;
  readonly #told: PlacedMemory[] = [];

  constructor(builder: CircuitBuilder) {
    this.#builder = builder;
  }

  /**
   * Adds the memories of an instance with their ports; its scopes must be there. `shared` are
   * those that the module around it names, or that it names in the module around it.
   */
  add(
    instance: Instance,
    depth: number,
    shared: readonly { readonly childMemory: number; readonly placed: PlacedMemory }[],
  ): void {
    const { memories } = instance.template.recording;
    instance.memories = none;
    if (memories.length === 0) return;
    const placed = memories.map(
      (_, number) =>
        shared.find(({ childMemory }) => childMemory === number)?.placed ?? new PlacedMemory(),
    );
    instance.memories = placed;
    for (const [number, memory] of memories.entries()) {
      const { contents } = memory;
      const at = placed[number]!;
      const addPorts = this.#ports(memory, instance);
      if (contents instanceof FarContents) {
        at.tell(depth, contents);
        this.#told.push(at);
        at.addPorts(addPorts);
      } else {
        const own = this.#memory(memory, contents, instance);
        addPorts(own);
        at.place(own, contents);
      }
    }
  }

  /** Gives memories the contents that other modules say; to be called when all are stamped. */
  finish(): void {
    for (const memory of new Set(this.#told)) memory.fill(this.#builder);
  }

  #memory(memory: RecordedMemory, contents: InitialContents, { scopes }: Instance): number {
    const { name, block, width, word, indices, origin } = memory;
    const path = this.#builder.hierarchy.path(scopes[block]!);
    return this.#builder.memory({
      ...{ name: path === '' ? name : `${path}.${name}`, width, word, indices },
      ...{ initial: contents.bytes, sourceIndex: origin.source, offset: origin.offset },
    });
  }

  /** Adds the ports that an instance has to a memory, once the number of that is known. */
  #ports(
    { width, ...memory }: RecordedMemory,
    { template: { recording }, nets, hasOrigin, source, offset }: Instance,
  ): (number: number) => void {
    const builder = this.#builder;
    // The nets of a frame are those of another instance soon.
    const moved = (list: readonly NetId[]): NetId[] => list.map((net) => netId(nets[net]!));
    const reads = memory.reads.map(({ address, firstDriver }) => ({
      place: hasOrigin ? { source, offset } : recording.driverOrigin(firstDriver),
      address: moved(address),
      data: Array.from({ length: width }, (_, bit) => {
        const isRead = recording.driverKind(firstDriver + bit) !== DROPPED;
        return isRead ? netId(nets[recording.driverOutput(firstDriver + bit)]!) : NO_NET;
      }),
    }));
    const writes = memory.writes.map(({ clock, edge, enable, address, data, mask }) => ({
      clock: netId(nets[clock]!),
      ...(edge !== undefined && { edge }),
      ...(enable !== undefined && { enable: netId(nets[enable]!) }),
      address: moved(address),
      data: moved(data),
      ...(mask !== undefined && { mask: moved(mask) }),
    }));
    return (number) => {
      for (const { place, address, data } of reads) {
        builder.at(place.source, place.offset);
        if (data.some((net) => net !== NO_NET)) builder.readPort(number, address, data);
      }
      for (const pins of writes) builder.writeMemory(number, pins);
    };
  }
}
