import type { Circuit } from './circuit.js';
import { gateInfo } from './gates.js';
import { netName, primaryNames } from './hierarchy.js';
import { instanceAt } from './instanceText.js';

/**
 * Names nets for a message: `a (top.v:12), nand at top.v:13 and 5 more`.
 *
 * Names come with the line of the net's driver where a source is known. At most `limit` are
 * written out (default 8).
 */
export function describeNets(circuit: Circuit, nets: ArrayLike<number>, limit = 8): string {
  const names = primaryNames(circuit.hierarchy, circuit.netCount);
  const shown = Array.from(nets)
    .slice(0, limit)
    .map((net) => placedNet(circuit, names, net));
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

/**
 * A net with the line of what drives it: `a (top.v:12)`, or where it has no name `nand at top.v:12`,
 * with the instance if one begins there: `nand g1 at …`, `nand in u7 at …` for a cell. `shown` makes
 * what is written of the path of a file.
 */
export function placedNet(
  circuit: Circuit,
  names: Int32Array,
  net: number,
  shown = (path: string): string => path,
): string {
  const source = circuit.sources[circuit.originSource[net]!];
  const name = netName(circuit.hierarchy, names, net);
  if (source === undefined) return name;
  const offset = circuit.originOffset[net]!;
  const line = `${shown(source.path)}:${source.place(offset).line}`;
  if (names[net]! >= 0) return `${name} (${line})`;
  const kind = gateInfo(circuit.kind[net]!).name;
  const instance = instanceAt(source, offset);
  if (instance === undefined) return `${kind} at ${line}`;
  return `${kind} ${instance.cell === kind ? '' : 'in '}${instance.name} at ${line}`;
}
