import type { Circuit } from '../circuit.js';
import { GateKind, isGate } from '../gates.js';

/**
 * How many gates, without what memories read, have each level; entry 0 counts those without one, on or behind a combinational
 * loop. `level` is that of `levelsOf`.
 */
export function gatesByLevel({ kind }: Circuit, level: Uint32Array): Uint32Array {
  const counts = new Uint32Array(highest(level) + 1);
  for (let net = 0; net < level.length; net++) {
    if (isGate(kind[net]!) && kind[net] !== GateKind.MemoryRead) counts[level[net]!]!++;
  }
  return counts;
}

/**
 * How many registers have so many gates on the longest path that leads to their data from any
 * register. Those that no register reaches are not counted, nor are paths through loops.
 */
export function registersByDepth(circuit: Circuit, level: Uint32Array): Uint32Array {
  const { registers, kind, faninStart, fanin } = circuit;
  // The number of gates since a register plus one; 0 where none leads here.
  const reach = new Uint32Array(circuit.netCount);
  for (const net of registers.output) reach[net] = 1;
  for (const net of netsInLevelOrder(level)) {
    if (!isGate(kind[net]!) || level[net] === 0) continue;
    let most = 0;
    for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) {
      most = Math.max(most, reach[fanin[i]!]!);
    }
    reach[net] = most === 0 ? 0 : most + 1;
  }
  let deepest = 0;
  for (const net of registers.data) deepest = Math.max(deepest, reach[net]!);
  const counts = new Uint32Array(deepest);
  for (const net of registers.data) if (reach[net] !== 0) counts[reach[net]! - 1]!++;
  return counts;
}

function netsInLevelOrder(level: Uint32Array): Uint32Array {
  const next = new Uint32Array(highest(level) + 2);
  for (let net = 0; net < level.length; net++) next[level[net]! + 1]!++;
  for (let i = 1; i < next.length; i++) next[i]! += next[i - 1]!;
  const order = new Uint32Array(level.length);
  for (let net = 0; net < level.length; net++) order[next[level[net]!]!++] = net;
  return order;
}

const highest = (level: Uint32Array): number =>
  level.reduce((most, each) => Math.max(most, each), 0);
