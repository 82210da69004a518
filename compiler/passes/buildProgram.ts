import { GrowableUint8, GrowableUint32 } from '../circuit/growable.js';
import {
  type Literal,
  type Logic,
  LogicOp,
  type StateUpdate,
  UPDATE_WIDTH,
} from '../logic/logic.js';
import { mapWrite } from '../logic/writes.js';
import { FIRST_INPUT, type Program, ProgramOp } from '../program/program.js';

/**
 * Writes a logic graph as a program: the operations of `order`, each in the polarity chosen, with
 * inversions where a reader needs the other one, a new block at each place of `blockStarts`.
 *
 * An inversion is made once per block, so that it never travels between blocks.
 */
export function buildProgram(
  logic: Logic,
  order: Uint32Array,
  blockStarts: readonly number[],
  inverted: Uint8Array,
): Program {
  const writer = new ProgramWriter(logic, inverted);
  let block = 1;
  for (const [place, node] of order.entries()) {
    if (place === blockStarts[block]) {
      writer.startBlock();
      block++;
    }
    writer.write(node);
  }
  return writer.finish();
}

/** Writes operations one after another, with the inversions that their operands need. */
export class ProgramWriter {
  readonly #logic: Logic;
  readonly #inverted: Uint8Array;
  readonly #op = new GrowableUint8(1024);
  readonly #a = new GrowableUint32(1024);
  readonly #b = new GrowableUint32(1024);
  readonly #c = new GrowableUint32(1024);
  readonly #blockStart = new GrowableUint32();
  /** Value of each node in its polarity. */
  readonly #valueOf: Uint32Array;
  /** Value of each node's inverse, and the block that made it. */
  readonly #inverse: Uint32Array;
  readonly #inverseBlock: Int32Array;
  readonly #firstResult: number;

  constructor(logic: Logic, inverted: Uint8Array) {
    this.#logic = logic;
    this.#inverted = inverted;
    this.#valueOf = new Uint32Array(logic.nodeCount);
    this.#inverse = new Uint32Array(logic.nodeCount);
    this.#inverseBlock = new Int32Array(logic.nodeCount).fill(-1);
    const firstState = FIRST_INPUT + logic.inputCount;
    this.#firstResult = firstState + logic.states.length;
    for (let node = 1; node < logic.nodeCount; node++) {
      if (logic.op[node] === LogicOp.Input) this.#valueOf[node] = FIRST_INPUT + logic.a[node]!;
      if (logic.op[node] === LogicOp.State) this.#valueOf[node] = firstState + logic.a[node]!;
    }
    this.#blockStart.push(0);
  }

  /** Writes the operation of a node; those that it reads have been written before. */
  write(node: number): void {
    const { a, b, op } = this.#logic;
    const kept = this.#inverted[node]!;
    if (op[node] === LogicOp.And) {
      // ~(a & b) = ~a | ~b: both operands in the polarity that the node is kept in.
      const first = this.#literal(a[node]! ^ kept);
      const second = this.#literal(b[node]! ^ kept);
      this.#valueOf[node] = this.#append(kept ? ProgramOp.Or : ProgramOp.And, first, second, 0);
    } else if (op[node] === LogicOp.Xor) {
      const first = this.#valueOf[a[node]! >>> 1]!;
      const second = this.#valueOf[b[node]! >>> 1]!;
      const parity = this.#keptParity(a[node]!) ^ this.#keptParity(b[node]!) ^ kept;
      const value = this.#append(ProgramOp.Xor, first, second, 0);
      this.#valueOf[node] = parity === 0 ? value : this.#append(ProgramOp.Not, value, 0, 0);
    } else if (op[node]! >= LogicOp.Pack) {
      this.#writeWord(node);
    } else {
      this.#writeMux(node, kept);
    }
  }

  /** Ends the block at hand: what follows stands in the next one. */
  startBlock(): void {
    this.#blockStart.push(this.#op.length);
  }

  /** Number of blocks so far, the one at hand included. */
  get blockCount(): number {
    return this.#blockStart.length;
  }

  /** The value that a literal has in the block at hand. */
  value(literal: Literal): number {
    return this.#literal(literal);
  }

  /** The program, whose response is the first `outputCount` outputs of the graph. */
  finish(outputCount = this.#logic.outputs.length): Program {
    const logic = this.#logic;
    const { states } = logic;
    const stateInverted = new Uint8Array(states.length);
    for (let node = 0; node < logic.nodeCount; node++) {
      if (logic.op[node] === LogicOp.State) stateInverted[logic.a[node]!] = this.#inverted[node]!;
    }
    const updates = this.#updates(stateInverted);
    const shown = logic.outputs.slice(0, outputCount);
    const outputs = Uint32Array.from(shown, (literal) => this.#literal(literal));
    const next = Uint32Array.from(logic.next, (literal, bit) =>
      this.#literal(literal ^ stateInverted[bit]!),
    );
    const writes = logic.writes.map((write) =>
      mapWrite(write, (literal) => this.#literal(literal)),
    );
    const faults = logic.faults.map((fault) => ({ ...fault, when: this.#literal(fault.when) }));
    const last = this.#blockStart.length - 1;
    if (last === 0 || this.#blockStart.get(last) !== this.#op.length) {
      this.#blockStart.push(this.#op.length);
    }
    return {
      inputCount: logic.inputCount,
      stateCount: states.length,
      op: this.#op.take(),
      a: this.#a.take(),
      b: this.#b.take(),
      c: this.#c.take(),
      outputs,
      next,
      states,
      stateInverted,
      updates,
      writes,
      faults,
      blockStart: this.#blockStart.take(),
    };
  }

  #updates(stateInverted: Uint8Array): StateUpdate[] {
    return this.#logic.updates.map((update) => {
      const { first, from, enable, gate } = update;
      // Bits are copied as they are kept: all must be kept the same way as what they copy.
      const agrees = (i: number): boolean => stateInverted[first + i] === stateInverted[from + i];
      const copies = from >= 0 && Array.from({ length: UPDATE_WIDTH }, (_, i) => i).every(agrees);
      return {
        first,
        from: copies ? from : -1,
        enable: this.#literal(enable),
        gate: this.#literal(gate),
      };
    });
  }

  // Numbers, words and bits of words are kept as they are.
  #writeWord(node: number): void {
    const { op, a, b, c } = this.#logic;
    const kind =
      op[node] === LogicOp.Pack
        ? ProgramOp.Pack
        : op[node] === LogicOp.Load
          ? ProgramOp.Load
          : ProgramOp.Bit;
    const [first, second] = [this.#literal(a[node]!), this.#literal(b[node]!)];
    this.#valueOf[node] = this.#append(kind, first, second, c[node]!);
  }

  #writeMux(node: number, kept: number): void {
    const { a, b, c } = this.#logic;
    const select = this.#valueOf[a[node]! >>> 1]!;
    let zero = this.#literal(b[node]! ^ kept);
    let one = this.#literal(c[node]! ^ kept);
    if (this.#keptParity(a[node]!) === 1) [zero, one] = [one, zero];
    this.#valueOf[node] = this.#append(ProgramOp.Mux, select, zero, one);
  }

  // 1 where the literal's plain value is the inverse of the node's kept value.
  #keptParity(literal: Literal): number {
    return (literal & 1) ^ this.#inverted[literal >>> 1]!;
  }

  #literal(literal: Literal): number {
    const node = literal >>> 1;
    if (node === 0) return literal;
    if (this.#keptParity(literal) === 0) return this.#valueOf[node]!;
    const block = this.#blockStart.length;
    if (this.#inverseBlock[node] !== block) {
      this.#inverseBlock[node] = block;
      this.#inverse[node] = this.#append(ProgramOp.Not, this.#valueOf[node]!, 0, 0);
    }
    return this.#inverse[node]!;
  }

  #append(op: number, a: number, b: number, c: number): number {
    this.#op.push(op);
    this.#a.push(a);
    this.#b.push(b);
    this.#c.push(c);
    return this.#firstResult + this.#op.length - 1;
  }
}
