import type { Lists } from '../../circuit/lists.js';
import { type Logic, LogicOp } from '../../logic/logic.js';
import { sinksOf } from '../../logic/sinks.js';
import { orderSinks } from '../orderSinks.js';
import { eachOperand, usersOf } from './users.js';

/** Touches after which a value counts as gone from the registers and from what is kept. */
const RECENT = 100;
/** Goals that are weighed against each other at a time, the ones found last. */
const CANDIDATES = 24;
/** Users that are looked at to find the goals that a value leads to. */
const CLIMB = 60;
/** Values with more users than this lead everywhere, and so nowhere. */
const MOST_USERS = 200;
/** Most operations that a goal may still need for being taken out of turn. */
const LARGEST = 24;
/** What one more operation counts for, where a value to be fetched counts 1. */
const OPERATION = 0.2;
/** What a goal that is no sink counts for: it must be kept until it is read. */
const KEPT = 3;

/**
 * Lists the operation nodes of a logic graph in the order to compute them for lanes, where every
 * value takes a vector register, and fetching one costs more than what is done with it.
 *
 * Goals are the sinks, and what is read several times. Next comes the small goal near by (one that
 * reads what has just been touched) that finds most of what it reads at hand, else the next one of
 * `orderSinks`. Within a goal's cone the operand that needs more registers comes first (R. Sethi,
 * J. D. Ullman, "The generation of optimal code for arithmetic expressions", JACM 17(4), 1970).
 */
export function orderLaneNodes(logic: Logic): Uint32Array {
  const ordering = new Ordering(logic);
  for (const sink of orderSinks(logic)) {
    ordering.takeNear();
    ordering.take(sink >>> 1);
  }
  ordering.takeNear();
  return Uint32Array.from(ordering.order);
}

class Ordering {
  readonly order: number[] = [];
  readonly #logic: Logic;
  readonly #users: Lists;
  readonly #needs: Float64Array;
  /** Per node what it counts for as a goal, negative if it is none. */
  readonly #goal: Int8Array;
  readonly #isDone: Uint8Array;
  /** Per node, when it was last made or read. */
  readonly #touchedAt: Float64Array;
  #touches = 0;
  /** Values touched for the goal that is taken, each once. */
  readonly #touched: number[] = [];
  readonly #touchedFor: Uint32Array;
  #takes = 0;
  #candidates: number[] = [];
  readonly #isCandidate: Uint8Array;
  readonly #visit: Uint32Array;
  #visits = 0;
  /** Room for what one walk still has to visit. */
  readonly #stack = new Uint32Array(3 * LARGEST + 4);

  constructor(logic: Logic) {
    const { nodeCount } = logic;
    this.#logic = logic;
    this.#users = usersOf(logic);
    this.#needs = registerNeeds(logic);
    this.#goal = Int8Array.from({ length: nodeCount }, (_, node) =>
      this.#users.start[node + 1]! - this.#users.start[node]! > 1 ? KEPT : -1,
    );
    this.#isDone = new Uint8Array(nodeCount);
    this.#touchedAt = new Float64Array(nodeCount).fill(Number.NEGATIVE_INFINITY);
    this.#isCandidate = new Uint8Array(nodeCount);
    this.#visit = new Uint32Array(nodeCount);
    this.#touchedFor = new Uint32Array(nodeCount);
    for (const sink of sinksOf(logic)) this.#goal[sink >>> 1] = 0;
    // What is no operation is there from the start.
    for (let node = 0; node < nodeCount; node++) {
      if (logic.op[node]! < LogicOp.And) this.#isDone[node] = 1;
    }
  }

  /** Takes goals near by as long as there are any. */
  takeNear(): void {
    for (let goal = this.#best(); goal >= 0; goal = this.#best()) this.take(goal);
  }

  /** Computes what a goal still needs, and looks around for goals that read the same. */
  take(goal: number): void {
    if (this.#isDone[goal] === 1) return;
    this.#takes++;
    const stack = [goal];
    while (stack.length > 0) {
      const node = stack[stack.length - 1]!;
      const depth = stack.length;
      if (this.#isDone[node] === 0) this.#pushMissing(node, stack);
      if (stack.length > depth) continue;
      stack.pop();
      if (this.#isDone[node] === 1) continue;
      this.#isDone[node] = 1;
      this.order.push(node);
      const { op, a, b, c } = this.#logic;
      this.#touch(a[node]! >>> 1);
      this.#touch(b[node]! >>> 1);
      if (op[node] === LogicOp.Mux) this.#touch(c[node]! >>> 1);
      this.#touch(node);
    }
    for (const node of this.#touched) this.#findCandidates(node);
    this.#touched.length = 0;
  }

  // Pushes the operands that are not there yet, the one that needs most registers last.
  #pushMissing(node: number, stack: number[]): void {
    const from = stack.length;
    eachOperand(this.#logic, node, (operand) => {
      if (this.#isDone[operand] === 1) return;
      stack.push(operand);
      for (let i = stack.length - 1; i > from; i--) {
        const [below, above] = [stack[i - 1]!, stack[i]!];
        if (this.#needs[below]! <= this.#needs[above]!) break;
        [stack[i - 1], stack[i]] = [above, below];
      }
    });
  }

  #touch(node: number): void {
    // Looked around from once for each goal.
    if (this.#touchedFor[node] !== this.#takes) this.#touched.push(node);
    this.#touchedFor[node] = this.#takes;
    this.#touchedAt[node] = ++this.#touches;
  }

  // Climbs from a value to the goals that it leads to.
  #findCandidates(from: number): void {
    const stack = [from];
    let left = CLIMB;
    for (let node = stack.pop(); node !== undefined && left > 0; node = stack.pop()) {
      const [start, end] = [this.#users.start[node]!, this.#users.start[node + 1]!];
      if (end - start > MOST_USERS) continue;
      left -= end - start;
      for (let i = start; i < end; i++) {
        const user = this.#users.members[i]!;
        if (this.#isDone[user] === 1) continue;
        stack.push(user);
        if (this.#goal[user]! < 0 || this.#isCandidate[user] === 1) continue;
        this.#isCandidate[user] = 1;
        this.#candidates.push(user);
      }
    }
  }

  #best(): number {
    this.#pruneCandidates();
    let best = -1;
    let least = Number.POSITIVE_INFINITY;
    for (const goal of this.#candidates) {
      const cost = this.#cost(goal) + this.#goal[goal]!;
      if (cost < least) [best, least] = [goal, cost];
    }
    return best;
  }

  #pruneCandidates(): void {
    const open = this.#candidates.filter((goal) => this.#isDone[goal] === 0);
    const dropped = open.splice(0, Math.max(0, open.length - CANDIDATES));
    for (const goal of dropped) this.#isCandidate[goal] = 0;
    this.#candidates = open;
  }

  // What it takes to compute a goal now: less for what is at hand, infinite beyond `LARGEST`.
  #cost(goal: number): number {
    const visit = ++this.#visits;
    const stack = this.#stack;
    stack[0] = goal;
    let [size, cost, operations] = [1, 0, 0];
    const { op, a, b, c } = this.#logic;
    while (size > 0) {
      const node = stack[--size]!;
      if (node === 0 || this.#visit[node] === visit) continue;
      this.#visit[node] = visit;
      if (this.#isDone[node] === 1) {
        cost += this.#touches - this.#touchedAt[node]! < RECENT ? -1 : 1;
        continue;
      }
      operations++;
      if (operations > LARGEST) return Number.POSITIVE_INFINITY;
      cost += OPERATION;
      stack[size++] = a[node]! >>> 1;
      stack[size++] = b[node]! >>> 1;
      if (op[node] === LogicOp.Mux) stack[size++] = c[node]! >>> 1;
    }
    return cost;
  }
}

// Registers that each node's expression needs, as if it shared nothing.
function registerNeeds(logic: Logic): Float64Array {
  const needs = new Float64Array(logic.nodeCount).fill(1);
  for (let node = 1; node < logic.nodeCount; node++) {
    if (logic.op[node]! < LogicOp.And) continue;
    const each: number[] = [];
    eachOperand(logic, node, (operand) => each.push(needs[operand]!));
    each.sort((p, q) => q - p);
    needs[node] = Math.max(...each.map((need, held) => need + held));
  }
  return needs;
}
