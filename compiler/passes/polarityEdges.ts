import { type Logic, LogicOp } from '../logic/logic.js';

/**
 * Who reads which node, and which of these reads need the inverse of what is kept.
 *
 * An edge is a read whose polarity matters: of an and-node, of the 1-operand of a multiplexer, of
 * an output or a next state. It is at odds when `sign ^ kept(node) ^ kept(reader)` is 1.
 */
export class PolarityEdges {
  readonly inverted: Uint8Array;
  /** Nodes that at least one reader needs inverted: each costs one inversion. */
  cost = 0;
  readonly #driver: number[] = [];
  readonly #odd: number[] = [];
  readonly #oddReads: Int32Array;
  readonly #edgesOf: number[][];
  readonly #users: number[][];

  constructor(logic: Logic) {
    this.inverted = new Uint8Array(logic.nodeCount);
    this.#oddReads = new Int32Array(logic.nodeCount);
    this.#edgesOf = Array.from({ length: logic.nodeCount }, () => []);
    this.#users = Array.from({ length: logic.nodeCount }, () => []);
    for (let node = 1; node < logic.nodeCount; node++) this.#addNode(logic, node);
    this.#addSinks(logic);
  }

  usersOf(node: number): readonly number[] {
    return this.#users[node]!;
  }

  /** Turns over one node; call it for all that follows too, in any order. */
  turn(node: number): void {
    this.inverted[node]! ^= 1;
    for (const edge of this.#edgesOf[node]!) this.#flip(edge);
  }

  #addNode(logic: Logic, node: number): void {
    const op = logic.op[node]!;
    if (op < LogicOp.And) return;
    const a = logic.a[node]!;
    const b = logic.b[node]!;
    this.#users[a >>> 1]!.push(node);
    if (b >>> 1 !== a >>> 1) this.#users[b >>> 1]!.push(node);
    if (op === LogicOp.And) {
      this.#edge(a, node);
      this.#edge(b, node);
    } else if (op === LogicOp.Mux) {
      this.#edge(logic.c[node]!, node);
    }
  }

  #addSinks(logic: Logic): void {
    const stateNode = new Int32Array(logic.states.length);
    for (let node = 0; node < logic.nodeCount; node++) {
      if (logic.op[node] === LogicOp.State) stateNode[logic.a[node]!] = node;
    }
    // Node 0 stands for a reader outside, which never turns over.
    for (const [bit, literal] of logic.next.entries()) this.#edge(literal, stateNode[bit]!);
    for (const { enable, gate } of logic.updates) {
      this.#edge(enable, 0);
      this.#edge(gate, 0);
    }
    for (const literal of logic.outputs) this.#edge(literal, 0);
    for (const fault of logic.faults) this.#edge(fault.when, 0);
  }

  #edge(literal: number, reader: number): void {
    const driver = literal >>> 1;
    if (driver === 0) return;
    const edge = this.#driver.push(driver) - 1;
    this.#odd.push(0);
    this.#edgesOf[driver]!.push(edge);
    if (reader !== 0) this.#edgesOf[reader]!.push(edge);
    if ((literal & 1) === 1) this.#flip(edge);
  }

  #flip(edge: number): void {
    const driver = this.#driver[edge]!;
    this.#odd[edge]! ^= 1;
    if (this.#odd[edge] === 1) {
      if (this.#oddReads[driver]!++ === 0) this.cost++;
    } else if (--this.#oddReads[driver]! === 0) this.cost--;
  }
}
