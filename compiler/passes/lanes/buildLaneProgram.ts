import { GrowableUint8, GrowableUint32 } from '../../circuit/growable.js';
import { type Literal, type Logic, LogicOp } from '../../logic/logic.js';
import { FIRST_LANE_INPUT, LaneOp, type LaneProgram } from '../../program/laneProgram.js';

/**
 * Writes a logic graph as a program for lanes: the operations of `order`, each in the polarity
 * chosen. What is left to invert is inverted right behind the operation that makes it.
 */
export function buildLaneProgram(
  logic: Logic,
  order: Uint32Array,
  inverted: Uint8Array,
): LaneProgram {
  const writer = new LaneWriter(logic, inverted);
  for (const node of order) writer.write(node);
  return writer.finish();
}

class LaneWriter {
  readonly #logic: Logic;
  readonly #inverted: Uint8Array;
  readonly #op = new GrowableUint8(1024);
  readonly #a = new GrowableUint32(1024);
  readonly #b = new GrowableUint32(1024);
  readonly #c = new GrowableUint32(1024);
  /** Value of each node in its polarity. */
  readonly #valueOf: Uint32Array;
  /** Value of the inverse of a node that is stored so. */
  readonly #inverse = new Map<number, number>();
  readonly #needsInverse: ReadonlySet<number>;
  readonly #stateInverted: Uint8Array;
  readonly #firstResult: number;

  constructor(logic: Logic, inverted: Uint8Array) {
    this.#logic = logic;
    this.#inverted = inverted;
    this.#valueOf = new Uint32Array(logic.nodeCount);
    this.#stateInverted = new Uint8Array(logic.states.length);
    const firstState = FIRST_LANE_INPUT + logic.inputCount;
    this.#firstResult = firstState + logic.states.length;
    for (let node = 1; node < logic.nodeCount; node++) {
      const index = logic.a[node]!;
      if (logic.op[node] === LogicOp.Input) this.#valueOf[node] = FIRST_LANE_INPUT + index;
      if (logic.op[node] !== LogicOp.State) continue;
      this.#valueOf[node] = firstState + index;
      this.#stateInverted[index] = inverted[node]!;
    }
    this.#needsInverse = this.#storedInverted();
  }

  write(node: number): void {
    const { a, b, op } = this.#logic;
    const [first, second] = [a[node]!, b[node]!];
    if (op[node] === LogicOp.And) this.#valueOf[node] = this.#and(first, second, node);
    else if (op[node] === LogicOp.Xor) this.#valueOf[node] = this.#xor(first, second, node);
    else this.#valueOf[node] = this.#mux(node);
    if (this.#needsInverse.has(node)) this.#inverseOf(node);
  }

  finish(): LaneProgram {
    const { inputCount, states, outputs, next, faults } = this.#logic;
    const values = {
      outputs: Uint32Array.from(outputs, (literal) => this.#stored(literal)),
      next: Uint32Array.from(next, (literal, bit) =>
        this.#stored(literal ^ this.#stateInverted[bit]!),
      ),
      faults: faults.map((fault) => ({ ...fault, when: this.#stored(fault.when) })),
    };
    return {
      inputCount,
      stateCount: states.length,
      op: this.#op.take(),
      a: this.#a.take(),
      b: this.#b.take(),
      c: this.#c.take(),
      ...values,
      states,
      stateInverted: this.#stateInverted,
    };
  }

  #storedInverted(): Set<number> {
    const { outputs, next, faults } = this.#logic;
    const literals = [
      ...outputs,
      ...next.map((literal, bit) => literal ^ this.#stateInverted[bit]!),
      ...faults.map(({ when }) => when),
    ];
    const odd = literals.filter((literal) => literal > 1 && this.#parity(literal) === 1);
    return new Set(odd.map((literal) => literal >>> 1));
  }

  // Kept inverted, an and-node is the or of its inverted operands (De Morgan).
  #and(a: Literal, b: Literal, node: number): number {
    const kept = this.#inverted[node]!;
    const [plain, half] = kept ? [LaneOp.Or, LaneOp.OrNot] : [LaneOp.And, LaneOp.AndNot];
    const [first, second] = [this.#operand(a ^ kept), this.#operand(b ^ kept)];
    const odd = this.#parity(a ^ kept) * 2 + this.#parity(b ^ kept);
    if (odd === 0) return this.#append(plain, first, second, 0);
    if (odd === 1) return this.#append(half, first, second, 0);
    if (odd === 2) return this.#append(half, second, first, 0);
    const opposite = this.#append(kept ? LaneOp.And : LaneOp.Or, first, second, 0);
    return this.#append(LaneOp.Not, opposite, 0, 0);
  }

  #xor(a: Literal, b: Literal, node: number): number {
    const [first, second] = [this.#operand(a), this.#operand(b)];
    const value = this.#append(LaneOp.Xor, first, second, 0);
    const odd = this.#parity(a) ^ this.#parity(b) ^ this.#inverted[node]!;
    return odd === 0 ? value : this.#append(LaneOp.Not, value, 0, 0);
  }

  #mux(node: number): number {
    const { a, b, c } = this.#logic;
    const kept = this.#inverted[node]!;
    const select = this.#valueOf[a[node]! >>> 1]!;
    let [zero, one] = [b[node]! ^ kept, c[node]! ^ kept];
    if (this.#parity(a[node]!) === 1) [zero, one] = [one, zero];
    const op = this.#parity(zero) === this.#parity(one) ? LaneOp.Mux : LaneOp.MuxNot;
    const value = this.#append(op, select, this.#operand(zero), this.#operand(one));
    return this.#parity(zero) === 0 ? value : this.#append(LaneOp.Not, value, 0, 0);
  }

  // The value of the literal's node, whatever the literal's parity. Constants are what they are.
  #operand(literal: Literal): number {
    return literal < 2 ? literal : this.#valueOf[literal >>> 1]!;
  }

  /** The value that is worth the literal itself. */
  #stored(literal: Literal): number {
    if (literal < 2) return literal;
    return this.#parity(literal) === 0
      ? this.#valueOf[literal >>> 1]!
      : this.#inverseOf(literal >>> 1);
  }

  #inverseOf(node: number): number {
    const known = this.#inverse.get(node);
    if (known !== undefined) return known;
    const made = this.#append(LaneOp.Not, this.#valueOf[node]!, 0, 0);
    this.#inverse.set(node, made);
    return made;
  }

  // 1 where the literal's plain value is the inverse of the node's kept value.
  #parity(literal: Literal): number {
    return literal < 2 ? 0 : (literal & 1) ^ this.#inverted[literal >>> 1]!;
  }

  #append(op: number, a: number, b: number, c: number): number {
    this.#op.push(op);
    this.#a.push(a);
    this.#b.push(b);
    this.#c.push(c);
    return this.#firstResult + this.#op.length - 1;
  }
}
