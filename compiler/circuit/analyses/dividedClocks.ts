import type { Circuit } from '../circuit.js';
import { NO_NET } from '../ids.js';
import { clockPins } from '../memoryPorts.js';
import type { Readers } from '../readers.js';
import { markCone } from './cones.js';
import { PinLists } from './pinLists.js';
import { NO_ROOTS, type RootSets } from './rootSets.js';

/**
 * Gives clock pins that no clock port reaches through gates the clock ports of the registers and
 * latches that make their clock, and theirs in turn.
 *
 * `pinRoots` (of `clockPins`) and `latchRoots` are sets of clock ports, of which the first is
 * completed. Returns the pins that got something.
 */
export function followDividers(
  circuit: Circuit,
  { start, reader }: Readers,
  sets: RootSets,
  pinRoots: Uint32Array,
  latchRoots: Uint32Array,
): number[] {
  const { registers, latches, netCount } = circuit;
  const isOpen = Uint8Array.from(pinRoots, (roots) => (roots === NO_ROOTS ? 1 : 0));
  if (!isOpen.includes(1)) return [];
  const openPins = clockPins(circuit).clock.map((pin, r) => (isOpen[r] === 1 ? pin : NO_NET));
  const inFront = new Uint8Array(netCount);
  markCone(circuit, openPins, inFront);
  const clockedBy = new PinLists(netCount, openPins);
  const derived = new Uint32Array(netCount);
  const pending: number[] = [];
  const raise = (net: number, roots: number): void => {
    if (inFront[net] === 0 || sets.isWithin(roots, derived[net]!)) return;
    derived[net] = sets.union(derived[net]!, roots);
    pending.push(net);
  };
  registers.output.forEach((net, r) => {
    raise(net, pinRoots[r]!);
  });
  latches.output.forEach((net, l) => {
    raise(net, latchRoots[l]!);
  });
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const roots = derived[net]!;
    for (let r = clockedBy.first(net); r >= 0; r = clockedBy.next(r)) {
      pinRoots[r] = sets.union(pinRoots[r]!, roots);
      if (r < registers.count) raise(registers.output[r]!, pinRoots[r]!);
    }
    for (let i = start[net]!; i < start[net + 1]!; i++) raise(reader[i]!, roots);
  }
  const isDivided = (r: number): boolean => isOpen[r] === 1 && pinRoots[r] !== NO_ROOTS;
  return Array.from(pinRoots.keys()).filter(isDivided);
}
