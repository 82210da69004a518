import type { Origin } from './recording.js';
import type { Template } from './template.js';

/** How many nets, drivers or instances one module may have by its own text. */
export const MAX_IN_MODULE = 1 << 25;

/** How many nets a design may have in all. */
export const MAX_NETS = 100_000_000;

/** How many generate blocks one module may have: each of them is a scope with names. */
export const MAX_BLOCKS = 1 << 18;

/** Thrown where a module grows beyond `MAX_IN_MODULE`, and made a message of by `elaborate`. */
export class TooLarge extends Error {
  /** The text that was being built. */
  readonly origin: Origin;

  constructor(what: string, origin: Origin) {
    super(`the module has more than ${MAX_IN_MODULE} ${what}; divide it into smaller ones`);
    this.origin = origin;
  }
}

/**
 * About how many nets a template makes, with everything below it. Instances are all counted, so
 * that a few lines of modules inside of modules may give a number beyond any memory.
 */
export function netsBelow(templates: readonly Template[], top: Template): number {
  const known = new Map<Template, number>();
  // Templates are made after those of their instances.
  for (const template of templates) {
    const { recording, children, boundary } = template;
    let nets = recording.netCount - boundary.length;
    for (let child = 0; child < children.count; child++) {
      nets += known.get(templates[children.template(child)]!) ?? 0;
    }
    known.set(template, Math.max(nets, 0));
  }
  return known.get(top) ?? 0;
}
