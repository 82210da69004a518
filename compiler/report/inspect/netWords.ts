import { basename } from 'node:path';
import { spanOfNet } from '../../circuit/analyses/netSpans.js';
import type { Circuit } from '../../circuit/circuit.js';
import { netName, primaryNames } from '../../circuit/hierarchy.js';
import { placedNet } from '../../circuit/netPlaces.js';
import type { Span } from '../../diagnostics/source.js';
import { figure } from '../figures.js';

/** Writes out nets of one circuit by name and place. */
export class NetWords {
  readonly #circuit: Circuit;
  readonly #names: Int32Array;

  constructor(circuit: Circuit) {
    this.#circuit = circuit;
    this.#names = primaryNames(circuit.hierarchy, circuit.netCount);
  }

  /** The name nearest to the top, or `nand in u7 at file.v:12` where it has none. */
  name(net: number): string {
    if (!this.hasName(net)) return this.placed(net);
    return netName(this.#circuit.hierarchy, this.#names, net);
  }

  hasName(net: number): boolean {
    return this.#names[net]! >= 0;
  }

  /** Where the net's driver stands. */
  span(net: number): Span | undefined {
    return spanOfNet(this.#circuit, net);
  }

  /** `name (file.v:12)`, or `nand at file.v:12`, without the folder. */
  placed(net: number): string {
    return placedNet(this.#circuit, this.#names, net, basename);
  }

  /** `a (top.v:12), b (top.v:13) and 5 more`; at most `limit` are written out (default 4). */
  list(nets: ArrayLike<number>, limit = 4): string {
    const shown = Array.from({ length: Math.min(limit, nets.length) }, (_, i) => nets[i]!);
    return listText(
      shown.map((net) => this.placed(net)),
      nets.length,
    );
  }
}

/** `a, b and 5 more`, where `total` counts those shown too. */
export function listText(shown: readonly string[], total: number): string {
  const rest = total - shown.length;
  return rest > 0 ? `${shown.join(', ')} and ${figure(rest)} more` : shown.join(', ');
}
