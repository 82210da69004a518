import { type Literal, type Logic, LogicOp, TRUE, UPDATE_WIDTH } from '../../logic/logic.js';
import type { Recipe } from './recipes.js';

/** Where state bits stand: the old bit at each new place, -1 for a place that is unused. */
export type Placement = number[];

/** Fewer bits than this are not laid next to each other for an update. */
const SMALLEST = 8;

/**
 * Lays state bits so that those with the same gate and enable are neighbours, and bits that copy
 * other bits stand in the order of those.
 *
 * Within a group, bits that are outputs come first, in output order, so that they can be packed
 * into the response straight from the state.
 */
export function placeStates(logic: Logic, recipes: readonly Recipe[]): Placement {
  const placing = new Placing(logic, recipes);
  placing.placeGroups();
  while (placing.placeCopies());
  placing.placeChains();
  placing.placeRest();
  return placing.placement;
}

class Placing {
  readonly placement: Placement = [];
  readonly #recipes: readonly Recipe[];
  readonly #placeOf: Int32Array;
  /** Per state bit: the bit that it copies under no condition, or -1. */
  readonly #copied: Int32Array;
  /** Per state bit: the bit that its data is, or -1. */
  readonly #source: Int32Array;
  readonly #output: Int32Array;

  constructor(logic: Logic, recipes: readonly Recipe[]) {
    this.#recipes = recipes;
    this.#placeOf = new Int32Array(recipes.length).fill(-1);
    const stateOf = (literal: Literal): number =>
      (literal & 1) === 0 && logic.op[literal >>> 1] === LogicOp.State
        ? logic.a[literal >>> 1]!
        : -1;
    this.#source = Int32Array.from(recipes, ({ data }) => stateOf(data));
    this.#copied = this.#source.map((source, bit) =>
      recipes[bit]!.gate === TRUE && recipes[bit]!.enable === TRUE && source !== bit ? source : -1,
    );
    this.#output = new Int32Array(recipes.length).fill(logic.outputs.length);
    for (const [place, output] of [...logic.outputs.entries()].reverse()) {
      const bit = logic.op[output >>> 1] === LogicOp.State ? logic.a[output >>> 1]! : -1;
      if (bit >= 0) this.#output[bit] = place;
    }
  }

  /** Places bits that share a gate or an enable. */
  placeGroups(): void {
    const groups = new Map<string, number[]>();
    for (const [bit, { gate, enable }] of this.#recipes.entries()) {
      if (gate === TRUE && enable === TRUE) continue;
      const key = `${gate} ${enable}`;
      const group = groups.get(key);
      if (group === undefined) groups.set(key, [bit]);
      else group.push(bit);
    }
    for (const group of groups.values()) {
      if (group.length < SMALLEST) continue;
      const rank = (bit: number): number => this.#output[bit]!;
      group.sort((p, q) => rank(p) - rank(q) || p - q);
      this.#appendWhole(group, 0);
    }
  }

  /** Places bits that copy neighbours in the order of these; false if there are none. */
  placeCopies(): boolean {
    const copies: number[] = [];
    for (const [bit, source] of this.#copied.entries()) {
      if (source >= 0 && this.#placeOf[bit]! < 0 && this.#placeOf[source]! >= 0) copies.push(bit);
    }
    const place = (bit: number): number => this.#placeOf[this.#copied[bit]!]!;
    copies.sort((p, q) => place(p) - place(q));
    let isPlaced = false;
    for (let start = 0; start < copies.length; ) {
      let end = start + 1;
      while (end < copies.length && place(copies[end]!) === place(copies[end - 1]!) + 1) end++;
      if (end - start >= SMALLEST) {
        this.#appendWhole(copies.slice(start, end), 0);
        isPlaced = true;
      }
      start = end;
    }
    return isPlaced;
  }

  /** Places shift registers: each bit after the one it copies. */
  placeChains(): void {
    const follower = new Int32Array(this.#copied.length).fill(-1);
    const isOpen = (bit: number): boolean => bit >= 0 && this.#placeOf[bit]! < 0;
    for (const [bit, source] of this.#copied.entries())
      if (isOpen(bit) && source >= 0) follower[source] = bit;
    for (let head = 0; head < follower.length; head++) {
      if (!isOpen(head) || isOpen(this.#copied[head]!)) continue;
      const chain: number[] = [];
      for (let bit = head; isOpen(bit) && chain.length <= follower.length; bit = follower[bit]!) {
        chain.push(bit);
      }
      if (chain.length <= SMALLEST) continue;
      // The head copies no neighbour: updates start behind it.
      this.#appendWhole(chain, 1);
    }
  }

  /** Places what is left, outputs first. */
  placeRest(): void {
    const rest = Array.from(this.#placeOf.keys()).filter((bit) => this.#placeOf[bit]! < 0);
    rest.sort((p, q) => this.#output[p]! - this.#output[q]! || p - q);
    this.#append(rest);
  }

  #append(bits: readonly number[]): void {
    for (const bit of bits) this.#placeOf[bit] = this.placement.push(bit) - 1;
  }

  // Appends bits and fills up, so that updates from the `apart`-th bit on are whole.
  #appendWhole(bits: readonly number[], apart: number): void {
    this.#append(bits);
    const beyond = (bits.length - apart) % UPDATE_WIDTH;
    for (let i = beyond; i > 0 && i < UPDATE_WIDTH; i++) this.placement.push(-1);
  }
}
