import { GateKind } from '../../../circuit/gates.js';
import { NO_NET } from '../../../circuit/ids.js';
import type { Children } from './children.js';
import { BUS_PART, type Recording } from './recording.js';
import { forEachFanin } from './usage.js';

/**
 * Takes out the gates and constants whose output has no name and no reader, such as the constants
 * that lowering an expression leaves behind: they would be repeated in every instance.
 *
 * `boundary` is in canonical nets. Returns a 1 for each net that then has no use, or undefined
 * where there is none.
 */
export function pruneUnused(
  recording: Recording,
  children: Children,
  boundary: Uint32Array,
  canonical: Uint32Array | undefined,
): Uint8Array | undefined {
  if (!recording.hasUndeclared) return undefined;
  const find = (net: number): number => canonical?.[net] ?? net;
  const readers = readersOf(recording, children, boundary, find);
  const driverOf = new Uint32Array(recording.netCount).fill(NO_NET);
  const pending: number[] = [];
  const visit = (net: number): void => {
    if (readers[net] === 0 && !recording.isDeclared(net) && driverOf[net] !== NO_NET) {
      pending.push(net);
    }
  };
  for (let driver = 0; driver < recording.driverCount; driver++) {
    if (recording.driverKind(driver) >= BUS_PART) continue;
    driverOf[find(recording.driverOutput(driver))] = driver;
  }
  for (let net = 0; net < recording.netCount; net++) visit(net);
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const driver = driverOf[net]!;
    if (isState(recording.driverKind(driver))) continue;
    forEachFanin(recording, driver, (source) => {
      readers[find(source)]!--;
      if (readers[find(source)] === 0) visit(find(source));
    });
    recording.drop(driver);
    driverOf[net] = NO_NET;
  }
  return unusedNets(recording, readers, driverOf, find);
}

function readersOf(
  recording: Recording,
  children: Children,
  boundary: Uint32Array,
  find: (net: number) => number,
): Uint32Array {
  const readers = new Uint32Array(recording.netCount);
  const count = (net: number): void => {
    readers[find(net)]!++;
  };
  for (let driver = 0; driver < recording.driverCount; driver++) {
    forEachFanin(recording, driver, count);
    // A bus counts as read: its parts are not taken out one by one.
    if (recording.driverKind(driver) !== BUS_PART) continue;
    readers[find(recording.driverOutput(driver))]!++;
  }
  for (const net of recording.writtenNets()) count(net);
  for (const { inputs } of recording.tables) for (const net of inputs) count(net);
  children.forEachNet(count);
  for (const net of boundary) readers[net]!++;
  return readers;
}

function unusedNets(
  recording: Recording,
  readers: Uint32Array,
  driverOf: Uint32Array,
  find: (net: number) => number,
): Uint8Array | undefined {
  const unused = new Uint8Array(recording.netCount);
  let count = 0;
  for (let net = 0; net < unused.length; net++) {
    if (find(net) !== net || recording.isDeclared(net)) continue;
    if (readers[net] !== 0 || driverOf[net] !== NO_NET) continue;
    unused[net] = 1;
    count++;
  }
  return count === 0 ? undefined : unused;
}

const isState = (kind: number): boolean => kind === GateKind.Register || kind === GateKind.Latch;
