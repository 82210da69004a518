import type { Circuit } from './circuit.js';
import { netName, primaryNames } from './hierarchy.js';

/**
 * Names nets for a message: `a (top.v:12), b (top.v:13) and 5 more`.
 *
 * Names come with the line of the net's driver where a source is known. At most `limit` are
 * written out (default 8).
 */
export function describeNets(circuit: Circuit, nets: ArrayLike<number>, limit = 8): string {
  const names = primaryNames(circuit.hierarchy, circuit.netCount);
  const shown = Array.from(nets)
    .slice(0, limit)
    .map((net) => netName(circuit.hierarchy, names, net) + placeOf(circuit, net));
  const rest = nets.length - shown.length;
  return rest > 0 ? `${shown.join(', ')} and ${rest} more` : shown.join(', ');
}

/** `FILE:LINE:COL` of what drives a net; empty where that is not known. */
export function placeOfNet(circuit: Circuit, net: number): string {
  const source = circuit.sources[circuit.originSource[net]!];
  if (source === undefined) return '';
  const { line, column } = source.place(circuit.originOffset[net]!);
  return `${source.path}:${line}:${column}`;
}

function placeOf(circuit: Circuit, net: number): string {
  const source = circuit.sources[circuit.originSource[net]!];
  if (source === undefined) return '';
  return ` (${source.path}:${source.place(circuit.originOffset[net]!).line})`;
}
