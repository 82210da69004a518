import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import type { Children } from './children.js';
import { DROPPED, Pin, type Recording } from './recording.js';
import type { Template } from './template.js';

/** Who drives and who reads each net of a module, its instances included. */
export class Usage {
  /** Per net: 0, 1 or 2 for several drivers; counted at the oldest of joined nets. */
  readonly drivers: Uint8Array;
  /** Per net: whether anything reads it. */
  readonly isRead: Uint8Array;
  readonly #recording: Recording;

  constructor(recording: Recording) {
    this.#recording = recording;
    this.drivers = new Uint8Array(recording.netCount);
    this.isRead = new Uint8Array(recording.netCount);
  }

  drive(net: NetId): void {
    const root = this.#recording.find(net);
    if (this.drivers[root]! < 2) this.drivers[root]!++;
  }

  read(net: NetId): void {
    this.isRead[this.#recording.find(net)] = 1;
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
    usage.drive(recording.driverOutput(driver));
    forEachFanin(recording, driver, (net) => usage.read(net));
  }
  for (let child = 0; child < children.count; child++) {
    const template = templates[children.template(child)]!;
    const { drives, reads } = template;
    for (let place = 0; place < drives.length; place++) {
      const net = children.port(child, place);
      if (net === NO_NET) continue;
      if (drives[place] === 1) usage.drive(net);
      if (reads[place] === 1) usage.read(net);
    }
    for (const { childNet, net } of children.imports(child)) {
      if (template.drivesNet(childNet)) usage.drive(net);
    }
  }
  return usage;
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
  const isState = kind === GateKind.Register || kind === GateKind.Latch;
  const end = isState ? start + Pin.Attributes : recording.faninEnd(driver);
  for (let i = start; i < end; i++) {
    const net = recording.faninAt(i);
    if (net !== NO_NET) visit(net);
  }
}
