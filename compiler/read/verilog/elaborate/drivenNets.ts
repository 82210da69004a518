import type { NetId } from '../../../circuit/ids.js';
import type { Template } from './template.js';

/** Nets of templates that modules around them drive by hierarchical names. */
export class DrivenNets {
  readonly #templates: readonly Template[];
  readonly #nets = new Map<Template, Set<NetId>>();

  constructor(templates: readonly Template[]) {
    this.#templates = templates;
  }

  /** Adds a net; if it stands for one of an instance, that one too. */
  add(template: Template, net: NetId): void {
    const known = this.#nets.get(template);
    if (known === undefined) this.#nets.set(template, new Set([net]));
    else known.add(net);
    const { children } = template;
    const inside = children.reached(net);
    if (inside === undefined) return;
    this.add(this.#templates[children.template(inside.child)]!, inside.childNet);
  }

  has(template: Template, net: NetId): boolean {
    return this.#nets.get(template)?.has(net) ?? false;
  }
}
