import type { Template } from './template.js';

// Numbers of 32 bits in a circuit for each net with its driver, and for each scope.
const NUMBERS_OF_NET = 10;
const NUMBERS_OF_SCOPE = 5;

// Some eight hundred megabytes; each byte of text allows for a little more.
const LEAST_NUMBERS = 200_000_000;
const NUMBERS_PER_BYTE = 8;

/**
 * How large the circuit of each template would be with all instances inside it, since a few modules
 * that hold each other twice make billions of instances.
 */
export class Totals {
  readonly #templates: readonly Template[];
  readonly #most: number;
  readonly #nets: number[] = [];
  readonly #numbers: number[] = [];

  /** `bytes` is the length of all texts. */
  constructor(templates: readonly Template[], bytes: number) {
    this.#templates = templates;
    this.#most = LEAST_NUMBERS + bytes * NUMBERS_PER_BYTE;
  }

  /** The nets of a template with those of all instances inside it. */
  nets(template: number): number {
    return this.#nets[template]!;
  }

  /** Counts the template added last; returns its nets if they are too many, else undefined. */
  add(): number | undefined {
    const { recording, children, blocks } = this.#templates[this.#templates.length - 1]!;
    let nets = recording.netCount;
    let numbers = nets * NUMBERS_OF_NET + blocks.length * NUMBERS_OF_SCOPE;
    for (const { nets: named } of blocks) numbers += named.length;
    for (let child = 0; child < children.count; child++) {
      const template = children.template(child);
      const shared = this.#templates[template]!.boundary.length;
      nets += this.#nets[template]! - shared;
      numbers += this.#numbers[template]! - shared * NUMBERS_OF_NET;
    }
    this.#nets.push(nets);
    this.#numbers.push(numbers);
    return numbers > this.#most ? nets : undefined;
  }
}
