import { Lists } from '../circuit/lists.js';
import { type Literal, type Logic, LogicOp } from '../logic/logic.js';
import { stateNodes } from '../logic/stateNodes.js';
import { writeLiterals } from '../logic/writes.js';

/**
 * Who reads which node, and which of these reads need the inverse of what is kept.
 *
 * An edge is a read whose polarity matters: of an and-node, of the 1-operand of a multiplexer, of
 * an output, a condition or a next state. It is at odds when `sign ^ kept(node) ^ kept(reader)` is
 * 1. Edges and users stand in flat lists by node, since there are several for each gate.
 */
export class PolarityEdges {
  readonly inverted: Uint8Array;
  /** Nodes that at least one reader needs inverted: each costs one inversion. */
  cost = 0;
  readonly #driver: Uint32Array;
  readonly #odd: Uint8Array;
  readonly #oddReads: Int32Array;
  readonly #edges: Lists;
  readonly #followers: Lists;

  constructor(logic: Logic) {
    const edges = edgesOf(logic);
    this.inverted = new Uint8Array(logic.nodeCount);
    this.#oddReads = new Int32Array(logic.nodeCount);
    this.#driver = Uint32Array.from(edges.literals, (literal) => literal >>> 1);
    this.#odd = new Uint8Array(this.#driver.length);
    this.#edges = new Lists(logic.nodeCount, (add) => {
      for (const [edge, driver] of this.#driver.entries()) {
        add(driver, edge);
        // Node 0 stands for a reader outside, which never turns over.
        if (edges.readers[edge] !== 0) add(edges.readers[edge]!, edge);
      }
    });
    this.#followers = new Lists(logic.nodeCount, (add) => eachFollower(logic, add));
    for (const [edge, literal] of edges.literals.entries()) if (literal & 1) this.#flip(edge);
  }

  /** The nodes whose polarity follows from that of a node. */
  followersOf(node: number): Uint32Array {
    return this.#followers.of(node);
  }

  /** Turns over one node; call it for all that follows too, in any order. */
  turn(node: number): void {
    this.inverted[node]! ^= 1;
    for (const edge of this.#edges.of(node)) this.#flip(edge);
  }

  #flip(edge: number): void {
    const driver = this.#driver[edge]!;
    this.#odd[edge]! ^= 1;
    if (this.#odd[edge] === 1) {
      if (this.#oddReads[driver]!++ === 0) this.cost++;
    } else if (--this.#oddReads[driver]! === 0) this.cost--;
  }
}

function edgesOf(logic: Logic): { literals: Literal[]; readers: number[] } {
  const literals: Literal[] = [];
  const readers: number[] = [];
  const add = (literal: Literal, reader: number): void => {
    if (literal < 2) return;
    literals.push(literal);
    readers.push(reader);
  };
  const stateNode = stateNodes(logic);
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op[node];
    if (op === LogicOp.Mux) add(logic.c[node]!, node);
    else if (op === LogicOp.Pack) add(logic.a[node]!, node);
    else if (op === LogicOp.Load) add(logic.b[node]!, node);
    else if (op === LogicOp.And) {
      add(logic.a[node]!, node);
      add(logic.b[node]!, node);
    }
  }
  for (const [bit, literal] of logic.next.entries()) add(literal, Math.max(stateNode[bit]!, 0));
  for (const { enable, gate } of logic.updates) {
    add(enable, 0);
    add(gate, 0);
  }
  for (const literal of logic.writes.flatMap(writeLiterals)) add(literal, 0);
  for (const literal of logic.outputs) add(literal, 0);
  for (const fault of logic.faults) add(fault.when, 0);
  return { literals, readers };
}

// A mux keeps the polarity of its 0-operand, an exclusive-or the parity of both operands.
function eachFollower(logic: Logic, add: (node: number, follower: number) => void): void {
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op[node];
    if (op === LogicOp.Xor) add(logic.a[node]! >>> 1, node);
    if (op === LogicOp.Xor || op === LogicOp.Mux) add(logic.b[node]! >>> 1, node);
  }
}
