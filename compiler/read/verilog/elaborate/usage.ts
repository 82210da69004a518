import { isWeak, PartKind, Strength, unpackTraits } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import type { Children } from './children.js';
import { BUS_PART, BusPin, DROPPED, Pin, type Recording } from './recording.js';
import { Drive, type Template } from './template.js';

// Of the number that `Usage` has for a net, the lowest bits count its full drivers.
const DRIVERS = 3;
const SEVERAL = 2;
const SHARED = 4;
const WEAK = 8;
/** Set beside one of the others for a driver that is always on. */
const STEADY = 16;
const READ = 32;
const PORT = 64;

/** Who drives and who reads each net of a module, its instances included. */
export class Usage {
  /** Per net, at the oldest of joined nets: the number of full drivers, and the bits above. */
  readonly #nets: Uint8Array;
  /** Nets that may have several full drivers. */
  #wired: Set<number> | undefined;
  readonly #recording: Recording;

  constructor(recording: Recording) {
    this.#recording = recording;
    this.#nets = new Uint8Array(recording.netCount);
  }

  /** Counts a driver of a kind that `Drive` tells. */
  drive(net: NetId, drive: number): void {
    const root = this.#recording.find(net);
    if (drive === Drive.Shared) this.#nets[root]! |= SHARED;
    else if (drive === Drive.Weak) this.#nets[root]! |= WEAK;
    else if (drive === Drive.Full && this.drivers(root) < SEVERAL) this.#nets[root]!++;
  }

  read(net: NetId): void {
    this.#nets[this.#recording.find(net)]! |= READ;
  }

  /** The full drivers of the oldest of joined nets: 0, 1 or 2 for several. */
  drivers(root: number): number {
    return this.#nets[root]! & DRIVERS;
  }

  /** Whether anything reads the oldest of joined nets. */
  isRead(root: number): boolean {
    return (this.#nets[root]! & READ) !== 0;
  }

  /** Puts on record that a net is one of a port, which its instances are to drive. */
  markPort(net: NetId): void {
    this.#nets[this.#recording.find(net)]! |= PORT;
  }

  /** Whether the oldest of joined nets is read though neither a driver nor a port gives it a value. */
  isOpen(root: number): boolean {
    return (this.#nets[root]! & (READ | PORT | DRIVERS | SHARED | WEAK)) === READ;
  }

  /** Lets a net have several full drivers. */
  allowSeveral(net: number): void {
    this.#wired ??= new Set();
    this.#wired.add(net);
  }

  /** The `Drive` of a net. */
  driveOf(net: NetId): number {
    const root = this.#recording.find(net);
    if (this.drivers(root) > 0) return this.#isWired(root) ? Drive.Shared : Drive.Full;
    if ((this.#nets[root]! & SHARED) !== 0) return Drive.Shared;
    return (this.#nets[root]! & WEAK) !== 0 ? Drive.Weak : Drive.None;
  }

  /** Puts on record that a net has a driver that always is on. */
  keepDriven(net: NetId): void {
    this.#nets[this.#recording.find(net)]! |= STEADY;
  }

  /** Whether a net has drivers, but none that always is on. */
  mayFloat(net: NetId): boolean {
    const root = this.#recording.find(net);
    return (this.#nets[root]! & (DRIVERS | SHARED | STEADY)) === SHARED;
  }

  /** Whether a net has anything but full drivers. */
  isBus(net: NetId): boolean {
    const root = this.#recording.find(net);
    return (this.#nets[root]! & (SHARED | WEAK | STEADY)) !== 0 || this.#isWired(root);
  }

  #isWired(root: number): boolean {
    return this.#wired?.has(root) ?? false;
  }

  /** The nets that the module had when its drivers were counted. */
  get netCount(): number {
    return this.#nets.length;
  }

  /** Whether the module knew a net when its drivers were counted. */
  knows(net: NetId): boolean {
    return net < this.#nets.length;
  }
}

/** Counts the drivers and readers of all nets. */
export function usageOf(
  recording: Recording,
  children: Children,
  templates: readonly Template[],
): Usage {
  const usage = new Usage(recording);
  const read = (net: NetId): void => usage.read(net);
  for (let driver = 0; driver < recording.driverCount; driver++) {
    countDriver(recording, driver, usage);
    forEachFanin(recording, driver, read);
  }
  for (const net of recording.writtenNets()) usage.read(net);
  for (const { reads } of recording.tables) for (const net of reads) usage.read(net);
  for (let child = 0; child < children.count; child++) {
    const template = templates[children.template(child)]!;
    const { drives, reads } = template;
    for (let place = 0; place < drives.length; place++) {
      const net = children.port(child, place);
      if (net === NO_NET) continue;
      usage.drive(net, drives[place]!);
      if (reads[place] === 1) usage.read(net);
    }
    if (!children.hasImports) continue;
    for (const { childNet, net } of children.imports(child)) {
      usage.drive(net, template.driveOf(childNet));
      if (template.readsNet(childNet)) usage.read(net);
    }
  }
  return usage;
}

/** What a template of a recording without instances says of its nets. */
export function usesOf(
  usage: Usage,
  boundary: Uint32Array,
  find: (net: number) => number,
): Pick<Template, 'drives' | 'reads' | 'driveOf' | 'readsNet'> {
  const drives = new Uint8Array(boundary.length);
  const reads = new Uint8Array(boundary.length);
  for (let place = 0; place < boundary.length; place++) {
    const net = boundary[place]!;
    drives[place] = usage.driveOf(net as NetId);
    if (usage.isRead(net)) reads[place] = 1;
  }
  return {
    drives,
    reads,
    driveOf: (net) => usage.driveOf(find(net) as NetId),
    readsNet: (net) => usage.isRead(find(net)),
  };
}

function countDriver(recording: Recording, driver: number, usage: Usage): void {
  const kind = recording.driverKind(driver);
  if (kind === DROPPED) return;
  const output = recording.driverOutput(driver);
  if (kind !== BUS_PART) {
    usage.drive(output, Drive.Full);
    return;
  }
  const start = recording.faninStart(driver);
  const traits = recording.faninAt(start + BusPin.Traits);
  const { kind: part, zero, one } = unpackTraits(traits);
  const isTwoWay = part === PartKind.TwoWay;
  const isAlwaysOn = recording.faninAt(start + BusPin.Control) === NO_NET;
  if (part === PartKind.Driver && isAlwaysOn && Math.min(zero, one) > Strength.HighZ) {
    usage.keepDriven(output);
  }
  usage.drive(output, isTwoWay || isWeak(traits) ? Drive.Weak : Drive.Shared);
  if (!isTwoWay) return;
  usage.drive(recording.faninAt(start + BusPin.Data), Drive.Weak);
  usage.read(output);
}

/** Calls `visit` for each net that a driver reads. */
export function forEachFanin(
  recording: Recording,
  driver: number,
  visit: (net: NetId) => void,
): void {
  const start = recording.faninStart(driver);
  const kind = recording.driverKind(driver);
  if (kind <= GateKind.Unknown || kind === DROPPED) return;
  const end =
    kind === GateKind.Register || kind === GateKind.Latch
      ? start + Pin.Attributes
      : kind === BUS_PART
        ? start + BusPin.Traits
        : recording.faninEnd(driver);
  for (let i = start; i < end; i++) {
    const net = recording.faninAt(i);
    if (net !== NO_NET) visit(net);
  }
}
