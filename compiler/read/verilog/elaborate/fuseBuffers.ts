import { GateKind } from '../../../circuit/gates.js';
import { NO_NET, netId } from '../../../circuit/ids.js';
import { BUS_PART, type Recording } from './recording.js';
import type { Usage } from './usage.js';

/**
 * Makes one net of a declared net and the unnamed net that a buffer copies to it, as `assign` and
 * processes leave them behind: `assign y = a & b` then is one gate. A copied constant becomes a
 * constant.
 *
 * Needs one driver per net at most. Returns the net that each net is one with, joined nets
 * included, or undefined where all stand for themselves.
 */
export function fuseBuffers(recording: Recording, usage: Usage): Uint32Array | undefined {
  const buffers = buffersOf(recording);
  if (buffers.length === 0 && !recording.hasJoins) return undefined;
  const canonical = new Uint32Array(recording.netCount);
  for (let net = 0; net < canonical.length; net++) canonical[net] = recording.find(netId(net));
  const driverOf = driversByNet(recording, canonical);
  for (const buffer of buffers) {
    const output = canonical[recording.driverOutput(buffer)]!;
    const input = canonical[recording.faninAt(recording.faninStart(buffer))]!;
    const driver = driverOf[input]!;
    if (recording.isDeclared(input) || usage.drivers(input) !== 1 || driver === NO_NET) continue;
    if (usage.isBus(netId(input))) continue;
    const kind = recording.driverKind(driver);
    if (kind <= GateKind.Unknown) {
      recording.makeConstant(buffer, kind as GateKind);
    } else if (output < input && usage.drivers(output) === 1) {
      recording.redirect(driver, netId(output));
      recording.drop(buffer);
      canonical[input] = output;
      driverOf[output] = driver;
    }
  }
  // A net may have been one with an unnamed net that has gone into another since.
  for (let net = 0; net < canonical.length; net++) canonical[net] = canonical[canonical[net]!]!;
  return canonical;
}

/** Buffers whose input has no name. */
function buffersOf(recording: Recording): number[] {
  const buffers: number[] = [];
  for (let driver = 0; driver < recording.driverCount; driver++) {
    if (recording.driverKind(driver) !== GateKind.Buf) continue;
    if (!recording.isDeclared(recording.faninAt(recording.faninStart(driver))))
      buffers.push(driver);
  }
  return buffers;
}

function driversByNet(recording: Recording, canonical: Uint32Array): Uint32Array {
  const driverOf = new Uint32Array(canonical.length).fill(NO_NET);
  for (let driver = 0; driver < recording.driverCount; driver++) {
    if (recording.driverKind(driver) >= BUS_PART) continue;
    driverOf[canonical[recording.driverOutput(driver)]!] = driver;
  }
  return driverOf;
}
