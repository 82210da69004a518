import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import { depthOf } from '../../../circuit/memory.js';
import { FarContents } from '../initialContents.js';
import type { ModuleBody } from './body.js';
import { NeedsRegisters } from './needsRegisters.js';
import type { RecordedMemory } from './recording.js';

/**
 * Asks for registers for an array whose words are all named by constants, as a delay line's are: a
 * memory would need a port for each word.
 */
export function refuseDelayLines({ builder }: ModuleBody): void {
  const isConstant = (net: NetId): boolean => {
    const kind = builder.kindOf(net);
    return kind >= 0 && kind <= GateKind.Unknown;
  };
  for (const memory of builder.memories) {
    if (isDelayLine(memory, isConstant)) throw new NeedsRegisters(memory);
  }
}

function isDelayLine(
  { reads, writes, indices, contents }: RecordedMemory,
  isConstant: (net: NetId) => boolean,
): boolean {
  if (contents instanceof FarContents) return false;
  if (writes.length === 0 || reads.length + writes.length < depthOf(indices)) return false;
  return [...reads, ...writes].every(({ address }) => address.every(isConstant));
}
