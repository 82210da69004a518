import type { GateKind } from '../../../circuit/gates.js';
import { GateKind as Kind } from '../../../circuit/gates.js';
import { type NetId, netId } from '../../../circuit/ids.js';
import type { GateSink } from '../scope.js';

/**
 * A sink that holds nothing but constants, for what must be a constant through and through.
 *
 * The id of a constant's net is its `GateKind`. All else that is asked of it is a fault of ours.
 */
export const constantSink: GateSink = {
  at() {},
  net: () => refuse('a net'),
  isDriven: () => true,
  kindOf: (net) => net,
  drive: () => refuse('a driver'),
  gate(kind: GateKind): NetId {
    return kind <= Kind.Unknown ? netId(kind) : refuse('a gate');
  },
  register: () => refuse('a register'),
  latch: () => refuse('a latch'),
  readMemory: () => refuse('a word of a memory'),
  writeMemory: () => refuse('a write to a memory'),
};

function refuse(what: string): never {
  throw new Error(`assertion: ${what} was asked for where only constants can be`);
}
