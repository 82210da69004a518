import { FALSE, type Literal, TRUE } from '../../logic/logic.js';
import { ALL, type Table, variables } from './functions.js';
import { Network, NodeKind } from './network.js';
import type { Structure, Structures } from './structures.js';

/** So many operations of a formula may be hoped to be there already. */
const HOPED_FOR = 2;
const NONE = -1;

/** Finds how to compute a function of a few literals of a network with the fewest new nodes. */
export class Pricing {
  #network = new Network();
  readonly #structures: Structures;
  /** Number of the search that has last looked at each function. */
  readonly #seen = new Uint32Array(ALL + 1);
  /** Nodes that would come alive. */
  readonly #added = new Uint8Array(ALL + 1);
  /** Literal that computes the function already, or `NONE`. */
  readonly #literal = new Int32Array(ALL + 1);
  readonly #chosen: (Structure | undefined)[] = new Array(ALL + 1).fill(undefined);
  #search = 0;

  constructor(structures: Structures) {
    this.#structures = structures;
  }

  /** Asks about another network from now on. */
  turnTo(network: Network): void {
    this.#network = network;
  }

  /**
   * How many nodes come alive for a function of up to four literals, at most `most`; undefined if it
   * is more.
   */
  price(table: Table, leaves: readonly Literal[], most: number): number | undefined {
    const cost = this.#structures.cost(table);
    if (cost === undefined || cost > most + HOPED_FOR) return undefined;
    this.#search++;
    this.#know(0, FALSE);
    this.#know(ALL, TRUE);
    for (const [i, leaf] of leaves.entries()) {
      this.#know(variables[i]!, leaf);
      this.#know(variables[i]! ^ ALL, leaf ^ 1);
    }
    const added = this.#price(table);
    return added <= most ? added : undefined;
  }

  /** Makes what `price` has found for a function. */
  build(table: Table): Literal {
    const known = this.#literal[table]!;
    if (known !== NONE) return known;
    const { isXor, left, right, inverted } = this.#chosen[table]!;
    const [p, q] = [this.build(left), this.build(right)];
    const made = isXor ? this.#network.xor(p, q) : this.#network.and(p, q);
    return made ^ (inverted ? 1 : 0);
  }

  #know(table: Table, literal: Literal): void {
    this.#seen[table] = this.#search;
    this.#literal[table] = literal;
    this.#added[table] = 0;
  }

  #price(table: Table): number {
    if (this.#seen[table] === this.#search) return this.#added[table]!;
    this.#seen[table] = this.#search;
    let least = Number.POSITIVE_INFINITY;
    let literal = NONE;
    for (const structure of this.#structures.of(table)) {
      const operands = this.#price(structure.left) + this.#price(structure.right);
      const found = this.#find(structure);
      const isThere = found !== NONE && !this.#network.isDead(found >>> 1);
      const added = isThere ? 0 : operands + 1;
      if (added >= least) continue;
      least = added;
      literal = found;
      this.#chosen[table] = structure;
      if (isThere) break;
    }
    this.#added[table] = least;
    this.#literal[table] = literal;
    return least;
  }

  #find({ isXor, left, right, inverted }: Structure): Literal {
    const [p, q] = [this.#literal[left]!, this.#literal[right]!];
    if (p === NONE || q === NONE) return NONE;
    const found = this.#network.find(isXor ? NodeKind.Xor : NodeKind.And, p, q);
    return found < 0 ? NONE : found ^ (inverted ? 1 : 0);
  }
}
