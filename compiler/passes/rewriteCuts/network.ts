import { GrowableUint8, GrowableUint32 } from '../../circuit/growable.js';
import { FALSE, type Literal, TRUE } from '../../logic/logic.js';

/** What a node of a network is. */
export const NodeKind = {
  /** A bit that comes from elsewhere, or the constant 0, which is node 0. */
  Leaf: 0,
  And: 1,
  Xor: 2,
} as const;

/**
 * A graph of ands and exclusive-ors of two operands that changes in place: a node can be replaced by
 * an equal one, and readers are counted, so that it shows what a change would save.
 *
 * A node that nobody reads is dead: it stays at hand and lives again when it is read.
 */
export class Network {
  readonly #kind = new GrowableUint8(1024);
  readonly #a = new GrowableUint32(1024);
  readonly #b = new GrowableUint32(1024);
  readonly #readers = new GrowableUint32(1024);
  /** Literal that stands for each node: its own, or what has replaced it. */
  readonly #standsFor = new GrowableUint32(1024);
  #slots = new Int32Array(4096).fill(-1);
  /** Nodes to look at; empty between two calls. */
  readonly #waiting: number[] = [];

  constructor() {
    this.leaf();
  }

  get nodeCount(): number {
    return this.#kind.length;
  }

  kind(node: number): number {
    return this.#kind.get(node);
  }

  /** First operand, as it stands now. */
  left(node: number): Literal {
    return this.now(this.#a.get(node));
  }

  right(node: number): Literal {
    return this.now(this.#b.get(node));
  }

  isDead(node: number): boolean {
    return this.#readers.get(node) === 0;
  }

  readers(node: number): number {
    return this.#readers.get(node);
  }

  /** What stands for a literal, after all replacements. */
  now(literal: Literal): Literal {
    let [current, turns] = [literal >>> 1, literal & 1];
    for (;;) {
      const next = this.#standsFor.get(current);
      if (next >>> 1 === current) break;
      current = next >>> 1;
      turns ^= next & 1;
    }
    const found = current * 2 + turns;
    // Shortens the way for the next time.
    if (current !== literal >>> 1) this.#standsFor.set(literal >>> 1, found ^ (literal & 1));
    return found;
  }

  leaf(): Literal {
    return this.#append(NodeKind.Leaf, 0, 0) * 2;
  }

  /** `p & q`, both as they stand now; an old node where there is one. */
  and(p: Literal, q: Literal): Literal {
    return this.#found(NodeKind.And, p, q, true);
  }

  xor(p: Literal, q: Literal): Literal {
    return this.#found(NodeKind.Xor, p, q, true);
  }

  /** The literal that `and` or `xor` would give, -1 if it would make a node. */
  find(kind: number, p: Literal, q: Literal): Literal {
    return this.#found(kind, p, q, false);
  }

  /** Adds a reader; returns how many nodes come alive. */
  read(literal: Literal): number {
    return this.#count(literal >>> 1, 1);
  }

  /** Takes a reader away; returns how many nodes die. */
  leave(literal: Literal): number {
    return this.#count(literal >>> 1, -1);
  }

  /**
   * Takes a node out for a trial: it and what it alone keeps alive are dead until `bringBack`. Returns
   * how many nodes these are.
   */
  takeOut(node: number): number {
    this.#readers.set(node, 1);
    return this.leave(node * 2);
  }

  /** Brings back a node that was taken out, with its readers. */
  bringBack(node: number, readers: number): void {
    this.read(node * 2);
    this.#readers.set(node, readers);
  }

  /** Lets all that read a node read an equal literal from now on; what nothing reads then dies. */
  replace(node: number, by: Literal): void {
    const readers = this.#readers.get(node);
    this.read(by);
    this.#readers.set(by >>> 1, this.#readers.get(by >>> 1) + readers - 1);
    this.takeOut(node);
    this.#standsFor.set(node, by);
  }

  // A node that comes alive reads its operands, and one that dies leaves them.
  #count(first: number, by: 1 | -1): number {
    const border = by === 1 ? 1 : 0;
    const waiting = this.#waiting;
    let changed = 0;
    for (let node: number | undefined = first; node !== undefined; node = waiting.pop()) {
      const readers = this.#readers.get(node) + by;
      this.#readers.set(node, readers);
      if (readers !== border || this.#kind.get(node) === NodeKind.Leaf) continue;
      changed++;
      waiting.push(this.left(node) >>> 1, this.right(node) >>> 1);
    }
    return changed;
  }

  #found(kind: number, p: Literal, q: Literal, makes: boolean): Literal {
    if (kind === NodeKind.Xor) return this.#foundXor(p, q, makes);
    if (p === FALSE || q === FALSE || p === (q ^ 1)) return FALSE;
    if (p === TRUE || p === q) return q;
    if (q === TRUE) return p;
    return this.#node(kind, Math.min(p, q), Math.max(p, q), makes);
  }

  #foundXor(p: Literal, q: Literal, makes: boolean): Literal {
    const inverted = (p ^ q) & 1;
    const [r, s] = [p & ~1, q & ~1];
    if (r === s) return inverted;
    if (r === FALSE) return s ^ inverted;
    if (s === FALSE) return r ^ inverted;
    const node = this.#node(NodeKind.Xor, Math.min(r, s), Math.max(r, s), makes);
    return node < 0 ? -1 : node ^ inverted;
  }

  #node(kind: number, a: Literal, b: Literal, makes: boolean): Literal {
    const mask = this.#slots.length - 1;
    let slot = hash(kind, a, b) & mask;
    for (;;) {
      const node = this.#slots[slot]!;
      if (node < 0) break;
      if (this.#a.get(node) === a && this.#b.get(node) === b && this.#kind.get(node) === kind) {
        return this.now(node * 2);
      }
      slot = (slot + 1) & mask;
    }
    if (!makes) return -1;
    const node = this.#append(kind, a, b);
    this.#slots[slot] = node;
    if (this.nodeCount * 2 > this.#slots.length) this.#rehash();
    return node * 2;
  }

  #append(kind: number, a: Literal, b: Literal): number {
    const node = this.#kind.length;
    this.#kind.push(kind);
    this.#a.push(a);
    this.#b.push(b);
    this.#readers.push(0);
    this.#standsFor.push(node * 2);
    return node;
  }

  #rehash(): void {
    const slots = new Int32Array(this.#slots.length * 2).fill(-1);
    const mask = slots.length - 1;
    for (let node = 1; node < this.nodeCount; node++) {
      if (this.#kind.get(node) === NodeKind.Leaf) continue;
      let slot = hash(this.#kind.get(node), this.#a.get(node), this.#b.get(node)) & mask;
      while (slots[slot]! >= 0) slot = (slot + 1) & mask;
      slots[slot] = node;
    }
    this.#slots = slots;
  }
}

function hash(kind: number, a: number, b: number): number {
  let h = Math.imul(a, 0x9e3779b1) ^ Math.imul(b, 0x85ebca6b) ^ kind;
  h ^= h >>> 15;
  h = Math.imul(h, 0x27d4eb2f);
  return (h ^ (h >>> 13)) >>> 0;
}
