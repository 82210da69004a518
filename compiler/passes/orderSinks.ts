import { Lists } from '../circuit/lists.js';
import { type Literal, type Logic, LogicOp } from '../logic/logic.js';
import { sinksOf } from '../logic/sinks.js';
import { BucketQueue } from './bucketQueue.js';

/**
 * Cone entries that are looked at together. Sinks are taken in groups of about this many, so that
 * time and memory stay linear in the size of the circuit.
 */
const GROUP_ENTRIES = 4_000_000;

/**
 * Lists the sinks of a logic graph (next states, outputs, faults) in the order to compute them:
 * next always one whose cone adds the fewest operations to what has been computed.
 *
 * Cones that share logic come together that way, which keeps shared values in registers.
 */
export function orderSinks(logic: Logic): Literal[] {
  const sinks = sinksOf(logic);
  const cones = new Cones(logic);
  const order: Literal[] = [];
  let group: Literal[] = [];
  for (const sink of sinks) {
    group.push(sink);
    if (cones.add(sink) < GROUP_ENTRIES) continue;
    cones.takeGreedily(group, order);
    group = [];
  }
  cones.takeGreedily(group, order);
  return order;
}

/** The cones of a group of sinks, without what earlier groups have computed. */
class Cones {
  readonly #logic: Logic;
  readonly #computed: Uint8Array;
  /** Per node, one more than the last sink whose cone it was found in. */
  readonly #visit: Uint32Array;
  #visits = 0;
  /** Nodes of each cone, one cone after another. */
  #nodes: number[] = [];
  #starts: number[] = [0];

  constructor(logic: Logic) {
    this.#logic = logic;
    this.#computed = new Uint8Array(logic.nodeCount);
    this.#visit = new Uint32Array(logic.nodeCount);
  }

  /** Adds the cone of a sink; returns the number of entries in the group so far. */
  add(sink: Literal): number {
    const { op, a, b, c } = this.#logic;
    const visit = ++this.#visits;
    const stack = [sink >>> 1];
    for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
      if (op[node]! < LogicOp.And || this.#visit[node] === visit || this.#computed[node]) continue;
      this.#visit[node] = visit;
      this.#nodes.push(node);
      stack.push(a[node]! >>> 1, b[node]! >>> 1);
      if (op[node] === LogicOp.Mux) stack.push(c[node]! >>> 1);
    }
    this.#starts.push(this.#nodes.length);
    return this.#nodes.length;
  }

  /** Adds the sinks of the group to `order`, greedily; empties the group. */
  takeGreedily(group: readonly Literal[], order: Literal[]): void {
    const starts = this.#starts;
    const missing = Uint32Array.from(group, (_, i) => starts[i + 1]! - starts[i]!);
    const queue = new BucketQueue(missing);
    const users = this.#usersByNode();
    for (let sink = queue.takeLeast(); sink !== -1; sink = queue.takeLeast()) {
      order.push(group[sink]!);
      for (let i = starts[sink]!; i < starts[sink + 1]!; i++) {
        const node = this.#nodes[i]!;
        if (this.#computed[node]) continue;
        this.#computed[node] = 1;
        for (let u = users.start[node]!; u < users.start[node + 1]!; u++) {
          queue.decrease(users.members[u]!);
        }
      }
    }
    this.#nodes = [];
    this.#starts = [0];
  }

  // For each node, the sinks of the group whose cones hold it.
  #usersByNode(): Lists {
    return new Lists(this.#logic.nodeCount, (add) => {
      for (let sink = 0; sink + 1 < this.#starts.length; sink++) {
        for (let i = this.#starts[sink]!; i < this.#starts[sink + 1]!; i++) {
          add(this.#nodes[i]!, sink);
        }
      }
    });
  }
}
