import type { FlatDesign, FlatNet } from './flatDesign.js';

/** Names that stand in the flat netlist. */
export class FlatNames {
  readonly #design: FlatDesign;
  readonly #ports = new Map<FlatNet, string>();

  constructor(design: FlatDesign) {
    this.#design = design;
    for (const { name, nets } of design.top.structure.ports) {
      for (const [i, net] of nets.entries()) {
        this.#ports.set(net, nets.length === 1 ? name : `${name}[${i}]`);
      }
    }
  }

  /** Whether a net is a bit of a port of the top. */
  isPort(net: FlatNet): boolean {
    return this.#ports.has(net);
  }

  /**
   * The name of a net: of a port, of the tie cells, the hierarchical one that it had, escaped, or a
   * number for the output of a gate.
   */
  net(net: FlatNet): string {
    const port = this.#ports.get(net);
    if (port !== undefined) return port;
    if (net < 2) return net === 0 ? 'tied_low' : 'tied_high';
    const { path, template, base } = this.#design.placeOf(net);
    const own = template.netNames[net - base]!;
    return own === '' || /^n\d+$/.test(own) ? `net_${net}` : escaped(`${path}${own}`);
  }
}

/** A name as the text has it: with a backslash and a space where it is no plain one. */
export function escaped(name: string): string {
  return /^[A-Za-z_][\w$]*$/.test(name) ? name : `\\${name} `;
}
