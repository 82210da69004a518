import type { Loops, SettlingSources } from '../loops.js';

/**
 * The shortest way from the lowest net of a loop back to itself, in the direction in which values
 * flow. The first net is not repeated at the end.
 */
export function loopPath(loops: Loops, sources: SettlingSources, loop: number): number[] {
  const first = loops.nets[loop]!.reduce((lowest, net) => Math.min(lowest, net));
  // Backwards from the first net; of each net met, the one that reads it.
  const readBy = new Map<number, number>();
  const queue = [first];
  for (let next = 0; next < queue.length; next++) {
    const net = queue[next]!;
    for (let i = 0, source = sources.at(net, 0); source !== -1; source = sources.at(net, ++i)) {
      if (loops.loopOf[source] !== loop || readBy.has(source)) continue;
      readBy.set(source, net);
      if (source === first) return wayRound(first, readBy);
      queue.push(source);
    }
  }
  throw new Error(`loop ${loop} does not lead back to its first net`);
}

function wayRound(first: number, readBy: ReadonlyMap<number, number>): number[] {
  const path = [first];
  for (let net = readBy.get(first)!; net !== first; net = readBy.get(net)!) path.push(net);
  return path;
}
