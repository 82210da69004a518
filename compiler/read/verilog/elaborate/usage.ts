import { isWeak, PartKind, Strength, unpackTraits } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import type { Children } from './children.js';
import { BUS_PART, BusPin, DROPPED, Pin, type Recording } from './recording.js';
import { Drive, type Template } from './template.js';

const SHARED = 1;
const WEAK = 2;
/** Set beside one of the others for a driver that is always on. */
const STEADY = 4;

/** Who drives and who reads each net of a module, its instances included. */
export class Usage {
  /** Per net: 0, 1 or 2 for several full drivers; counted at the oldest of joined nets. */
  readonly drivers: Uint8Array;
  /** Per net: whether anything reads it. */
  readonly isRead: Uint8Array;
  /** Nets that may have several full drivers. */
  readonly wired = new Set<number>();
  readonly #others: Uint8Array;
  readonly #recording: Recording;

  constructor(recording: Recording) {
    this.#recording = recording;
    this.drivers = new Uint8Array(recording.netCount);
    this.isRead = new Uint8Array(recording.netCount);
    this.#others = new Uint8Array(recording.netCount);
  }

  /** Counts a driver of a kind that `Drive` tells. */
  drive(net: NetId, drive: number): void {
    const root = this.#recording.find(net);
    if (drive === Drive.Shared) this.#others[root]! |= SHARED;
    else if (drive === Drive.Weak) this.#others[root]! |= WEAK;
    else if (drive === Drive.Full && this.drivers[root]! < 2) this.drivers[root]!++;
  }

  read(net: NetId): void {
    this.isRead[this.#recording.find(net)] = 1;
  }

  /** The `Drive` of a net. */
  driveOf(net: NetId): number {
    const root = this.#recording.find(net);
    if (this.drivers[root]! > 0) return this.wired.has(root) ? Drive.Shared : Drive.Full;
    if ((this.#others[root]! & SHARED) !== 0) return Drive.Shared;
    return (this.#others[root]! & WEAK) !== 0 ? Drive.Weak : Drive.None;
  }

  /** Puts on record that a net has a driver that always is on. */
  keepDriven(net: NetId): void {
    this.#others[this.#recording.find(net)]! |= STEADY;
  }

  /** Whether a net has drivers, but none that always is on. */
  mayFloat(net: NetId): boolean {
    const root = this.#recording.find(net);
    return this.drivers[root] === 0 && (this.#others[root]! & (SHARED | STEADY)) === SHARED;
  }

  /** Whether a net has anything but full drivers. */
  isBus(net: NetId): boolean {
    const root = this.#recording.find(net);
    return this.#others[root] !== 0 || this.wired.has(root);
  }

  /** Whether the module knew a net when its drivers were counted. */
  knows(net: NetId): boolean {
    return net < this.drivers.length;
  }
}

/** Counts the drivers and readers of all nets. */
export function usageOf(
  recording: Recording,
  children: Children,
  templates: readonly Template[],
): Usage {
  const usage = new Usage(recording);
  for (let driver = 0; driver < recording.driverCount; driver++) {
    countDriver(recording, driver, usage);
    forEachFanin(recording, driver, (net) => usage.read(net));
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
  return {
    drives: Uint8Array.from(boundary, (net) => usage.driveOf(net as NetId)),
    reads: Uint8Array.from(boundary, (net) => usage.isRead[net]!),
    driveOf: (net) => usage.driveOf(find(net) as NetId),
    readsNet: (net) => usage.isRead[find(net)] === 1,
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
