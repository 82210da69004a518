import type { CircuitBuilder } from '../../../circuit/builder.js';
import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import { ConstantNets } from './constantNets.js';
import {
  BUS_PART,
  BusPin,
  DROPPED,
  type Origin,
  Pin,
  type Recording,
  unpackAttributes,
} from './recording.js';
import { MemoryStamper, type PlacedMemory } from './stampMemories.js';
import type { Template } from './template.js';

/** An instance of a black box in the circuit. */
export interface PlacedBox {
  readonly template: Template;
  /** Dotted path of the instance. */
  readonly path: string;
  /** The circuit's net at each place of the boundary, `NO_NET` where nothing is connected. */
  readonly nets: readonly NetId[];
  readonly origin: Origin;
}

/** A template that is being stamped: how far its children are, and where its nets went. */
interface Frame {
  template: Template;
  /** Its place among the templates. */
  number: number;
  /** The circuit's net for each net of the template. */
  nets: Uint32Array;
  /** The circuit's scope of each block of the template. */
  scopes: number[];
  /** The circuit's memory for each one of the template. */
  memories: readonly PlacedMemory[];
  nextChild: number;
  /** Whether the circuit's logic is said to come from a certain place instead of the cell's text. */
  hasOrigin: boolean;
  source: number;
  offset: number;
}

const noMemories: readonly PlacedMemory[] = [];

/** So many nets of a template are few. */
const FEW = 64;

/**
 * Writes a template and everything below it into a circuit.
 *
 * Each net of an instance's boundary is the net that the instance connects to it; every other net
 * is made anew for each instance.
 */
export class Stamper {
  readonly #builder: CircuitBuilder;
  readonly #templates: readonly Template[];
  // One frame per level of hierarchy, kept for the next instance on that level.
  readonly #frames: Frame[] = [];
  // Pairs of a net and what drives it, of a template with tables, of which such have few.
  readonly #driven: number[] = [];
  #drivenCount = 0;
  // Lists of each length that gates are handed over in, so that none is made per gate.
  readonly #lists: NetId[][] = [];
  /** Index of the names of each template's first block in the circuit. */
  readonly #modules: (number | undefined)[] = [];
  /**
   * Values at power-up that other modules give to state elements, by the circuit's net, and how deep
   * in the hierarchy they are given: the outermost one wins, at one depth the last, as in
   * `PlacedMemory`.
   */
  readonly #farInitials = new Map<number, { readonly value: 0 | 1; readonly depth: number }>();
  readonly #memories: MemoryStamper;
  readonly constants: ConstantNets;
  /** The black boxes stamped so far. */
  readonly boxes: PlacedBox[] = [];

  /** The names of instances must be those that `builder` was made with. */
  constructor(builder: CircuitBuilder, templates: readonly Template[]) {
    this.#builder = builder;
    this.#templates = templates;
    this.#memories = new MemoryStamper(builder);
    this.constants = new ConstantNets(builder);
  }

  /**
   * Stamps the top, with constants on some of its nets; returns the circuit's nets of its boundary.
   */
  stamp(top: Template, held: ReadonlyMap<NetId, 0 | 1>): Uint32Array {
    const frame = this.#enter(0, this.#templates.indexOf(top));
    this.#fill(frame, 0);
    for (const [own, level] of held) {
      const net = netId(frame.nets[own]!);
      this.#builder.drive(net, level === 1 ? GateKind.One : GateKind.Zero, []);
      this.constants.add(net, level);
    }
    this.#addScopes(frame, top.name, 0);
    this.#memories.add(frame, 0, []);
    const boundary = top.boundary.map((net) => frame.nets[net]!);
    for (let depth = 0; depth >= 0; ) {
      const current = this.#frames[depth]!;
      if (current.nextChild === current.template.children.count) depth--;
      else if (this.#stampChild(current, current.nextChild++, depth + 1)) depth++;
    }
    this.#builder.setInitials(
      new Map(Array.from(this.#farInitials, ([net, { value }]) => [net, value])),
    );
    this.#memories.finish();
    return boundary;
  }

  /** Stamps a child's own logic; whether it has children to be stamped. */
  #stampChild(parent: Frame, child: number, depth: number): boolean {
    const { children } = parent.template;
    const number = this.#templateOf(parent, child);
    const template = this.#templates[number]!;
    template.whenUsed?.();
    const takesOver = !parent.hasOrigin && template.isCell;
    const frame = this.#enter(depth, number);
    frame.hasOrigin = parent.hasOrigin || takesOver;
    frame.source = takesOver ? children.source(child) : parent.source;
    frame.offset = takesOver ? children.offset(child) : parent.offset;
    const { nets } = frame;
    const { boundary } = template;
    for (let place = 0; place < boundary.length; place++) {
      const net = children.port(child, place);
      if (net !== NO_NET) nets[boundary[place]!] = parent.nets[net]!;
    }
    if (children.hasImports) {
      for (const { childNet, net } of children.imports(child)) nets[childNet] = parent.nets[net]!;
    }
    this.#fill(frame, depth);
    const name = children.name(child);
    if (name !== 0) this.#addScopes(frame, name, parent.scopes[children.block(child)]!);
    if (template.recording.memories.length > 0) this.#addMemories(parent, child, frame, depth);
    if (template.isBox) this.#addBox(parent, child, frame);
    return template.children.count > 0;
  }

  /** The template of a child; of a primitive the one for what its inputs are tied to. */
  #templateOf({ template: { children }, nets }: Frame, child: number): number {
    const number = children.template(child);
    const { tied, boundary } = this.#templates[number]!;
    if (tied === undefined) return number;
    let key = 0;
    for (let place = boundary.length - 1; place > 0; place--) {
      const net = children.port(child, place);
      const level = net === NO_NET ? -1 : this.constants.of(nets[net]!);
      key = key * 3 + level + 1;
    }
    return key === 0 ? number : tied(key);
  }

  #addMemories(parent: Frame, child: number, frame: Frame, depth: number): void {
    const imports = parent.template.children.memoryImports(child);
    const shared = imports.map(({ childMemory, memory }) => ({
      childMemory,
      placed: parent.memories[memory.number]!,
    }));
    this.#memories.add(frame, depth, shared);
  }

  #addBox(parent: Frame, child: number, { template, nets, scopes }: Frame): void {
    const { source, offset } = parent;
    const { children } = parent.template;
    const isOpen = (place: number): boolean => children.port(child, place) === NO_NET;
    this.boxes.push({
      template,
      path: this.#builder.hierarchy.path(scopes[0]!),
      nets: Array.from(template.boundary, (net, place) =>
        isOpen(place) ? NO_NET : netId(nets[net]!),
      ),
      origin: parent.hasOrigin ? { source, offset } : children.origin(child),
    });
  }

  #enter(depth: number, number: number): Frame {
    const template = this.#templates[number]!;
    const count = template.recording.netCount;
    let frame = this.#frames[depth];
    if (frame === undefined) {
      frame = {
        template,
        number,
        nets: new Uint32Array(64),
        scopes: [],
        memories: [],
        nextChild: 0,
        hasOrigin: false,
        source: 0,
        offset: 0,
      };
      this.#frames[depth] = frame;
    }
    if (frame.nets.length < count) frame.nets = new Uint32Array(count * 2);
    // To fill a few by a call takes longer.
    if (count > FEW) frame.nets.fill(NO_NET, 0, count);
    else for (let net = 0; net < count; net++) frame.nets[net] = NO_NET;
    frame.template = template;
    frame.number = number;
    frame.memories = noMemories;
    frame.nextChild = 0;
    frame.hasOrigin = false;
    return frame;
  }

  /** Makes the nets that are not connected yet, and all drivers. */
  #fill(frame: Frame, depth: number): void {
    const { template } = frame;
    if (frame.hasOrigin) this.#builder.at(frame.source, frame.offset);
    this.#makeNets(frame);
    const hasTables = template.recording.tables.length > 0;
    this.#makeDrivers(frame, hasTables);
    // A loop over nothing takes longer than to see that there is nothing.
    if (hasTables) this.#addTables(frame);
    if (template.constants !== undefined) this.#noteConstants(frame);
    if (template.farInitials !== undefined) this.#noteFarInitials(frame, depth);
    if (template.valueNames !== undefined) this.#nameValues(frame);
    if (template.netTypes !== undefined) this.#setNetTypes(frame);
  }

  #noteConstants({ template, nets }: Frame): void {
    for (const [net, level] of template.constants!) this.constants.add(nets[net]!, level);
  }

  #addTables({ template, nets }: Frame): void {
    const driven = this.#driven;
    for (const { output, inputs, table } of template.recording.tables) {
      let at = this.#drivenCount - 2;
      // Another driver of a bus may have come first; what was taken out has none, and no table.
      while (at >= 0 && driven[at] !== nets[output]) at -= 2;
      if (at < 0) continue;
      this.#builder.table(netId(driven[at + 1]!), translated(inputs, nets), table);
    }
  }

  #noteFarInitials({ template, nets }: Frame, depth: number): void {
    for (const [net, value] of template.farInitials!) {
      const own = nets[net]!;
      const known = this.#farInitials.get(own);
      if (known === undefined || depth <= known.depth) this.#farInitials.set(own, { value, depth });
    }
  }

  #nameValues({ template, nets }: Frame): void {
    for (const { nets: own, names } of template.valueNames!) {
      const moved = Uint32Array.from(own, (net) => nets[net]!);
      if (!moved.includes(NO_NET)) this.#builder.nameValues({ nets: moved, names });
    }
  }

  #setNetTypes({ template, nets }: Frame): void {
    for (const [net, type] of template.netTypes!) {
      this.#builder.setNetType(netId(nets[net]!), type);
    }
  }

  #makeNets({ template, nets, hasOrigin }: Frame): void {
    const { recording, canonical, unused } = template;
    const builder = this.#builder;
    const count = recording.netCount;
    for (let net = 0; net < count; net++) {
      const older = canonical === undefined ? net : (canonical[net] ?? net);
      if (older !== net) {
        nets[net] = nets[older]!;
      } else if (nets[net] === NO_NET && unused?.[net] !== 1) {
        if (!hasOrigin) builder.at(recording.netSource(net), recording.netOffset(net));
        nets[net] = builder.net();
      }
    }
  }

  #makeDrivers({ template, nets, hasOrigin }: Frame, hasTables: boolean): void {
    const { recording } = template;
    this.#drivenCount = 0;
    const count = recording.driverCount;
    for (let driver = 0; driver < count; driver++) {
      if (!hasOrigin) {
        this.#builder.at(recording.driverSource(driver), recording.driverOffset(driver));
      }
      const net = this.#drive(template, nets, driver);
      if (hasTables && net !== NO_NET) {
        this.#driven[this.#drivenCount++] = nets[recording.driverOutput(driver)]!;
        this.#driven[this.#drivenCount++] = net;
      }
    }
  }

  /** Returns the net that the driver has got, `NO_NET` for what is no driver of its own. */
  #drive({ recording, defaults }: Template, nets: Uint32Array, driver: number): NetId {
    let kind = recording.driverKind(driver);
    if (kind === DROPPED || kind === GateKind.MemoryRead) return NO_NET;
    const output = netId(nets[recording.driverOutput(driver)]!);
    if (defaults?.has(driver)) kind = this.#farInitials.get(output)?.value ?? kind;
    const start = recording.faninStart(driver);
    if (kind === GateKind.Register || kind === GateKind.Latch) {
      return this.#driveState(recording, driver, output, nets);
    }
    if (kind === BUS_PART) {
      const [data, control] = this.#translated(recording, nets, start, BusPin.Traits);
      const traits = recording.faninAt(start + BusPin.Traits);
      this.#builder.busPart(output, data!, control!, traits);
      this.constants.addPart(output, data!, control!, traits);
      return NO_NET;
    }
    const count = kind <= GateKind.Unknown ? 0 : recording.faninEnd(driver) - start;
    const fanin = this.#translated(recording, nets, start, count);
    return this.#builder.drive(output, kind as GateKind, fanin);
  }

  #driveState(recording: Recording, driver: number, output: NetId, nets: Uint32Array): NetId {
    const start = recording.faninStart(driver);
    const pins = this.#translated(recording, nets, start, Pin.Attributes);
    const { edge, priority, initial } = unpackAttributes(recording.faninAt(start + Pin.Attributes));
    const control = pins[Pin.Control]!;
    const data = pins[Pin.Data]!;
    const set = pins[Pin.Set]!;
    const reset = pins[Pin.Reset]!;
    if (recording.driverKind(driver) === GateKind.Latch) {
      return this.#builder.latch({ output, enable: control, data, set, reset, priority, initial });
    }
    const clock = control;
    return this.#builder.register({ output, clock, edge, data, set, reset, priority, initial });
  }

  /** A stretch of the fan-in list in nets of the circuit; overwritten by the next call. */
  #translated(
    recording: Recording,
    nets: Uint32Array,
    start: number,
    count: number,
  ): readonly NetId[] {
    this.#lists[count] ??= new Array<NetId>(count).fill(NO_NET);
    const list = this.#lists[count];
    for (let i = 0; i < count; i++) {
      const net = recording.faninAt(start + i);
      list[i] = net === NO_NET ? NO_NET : netId(nets[net]!);
    }
    return list;
  }

  /** Adds a scope for an instance and one for each block inside it. */
  #addScopes(
    { template, number, nets, scopes }: Frame,
    name: NameId | string,
    parent: number,
  ): void {
    const { hierarchy } = this.#builder;
    const { blocks } = template;
    const module = this.#modules[number] ?? this.#addModule(number);
    for (let index = 0; index < blocks.length; index++) {
      const block = blocks[index]!;
      const outer = index === 0 ? parent : scopes[block.parent]!;
      const own = index === 0 ? name : block.name;
      scopes[index] = hierarchy.addScopeOf(own, outer, module + index, nets, block.nets);
    }
  }

  /** Adds the names of a template's blocks; returns the index of the first. */
  #addModule(number: number): number {
    const { hierarchy } = this.#builder;
    const { blocks } = this.#templates[number]!;
    const [first = 0] = blocks.map(({ names }) => hierarchy.addModule(names));
    this.#modules[number] = first;
    return first;
  }
}

const translated = (list: readonly NetId[], nets: Uint32Array): NetId[] =>
  list.map((net) => netId(nets[net]!));
