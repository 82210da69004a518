import { type Literal, type Logic, LogicOp } from '../../logic/logic.js';

/** Rounds in which state bits take the polarity of their next values; few gain after the first. */
const ROUNDS = 12;

/**
 * Chooses for each node whether its value or the inverse is kept, where an inverted operand of an
 * and-node or a multiplexer costs nothing: every node takes the polarity that needs no inversion,
 * an and-node of two inverted operands being the inverse of their or (De Morgan).
 *
 * Inversions are left only at outputs, and at state bits that are kept otherwise than their next
 * value falls out; the round with the fewest wins. Returns 1 per inverted node. With `keepsStates`
 * no state bit is inverted, since other graphs share them.
 */
export function fallingPolarity(logic: Logic, keepsStates = false): Uint8Array {
  const states = new Uint8Array(logic.states.length);
  let fallen = fall(logic, states);
  let best = fallen;
  let fewest = inversions(logic, best, states);
  for (let round = 1; round < ROUNDS && fewest > 0 && !keepsStates; round++) {
    for (const [bit, literal] of logic.next.entries()) states[bit] = parity(fallen, literal);
    fallen = fall(logic, states);
    const count = inversions(logic, fallen, states);
    if (count >= fewest) continue;
    best = fallen;
    fewest = count;
  }
  return best;
}

// 1 where the literal's plain value is the inverse of the node's kept value. A constant is never
// kept, so it has no polarity to agree with.
const parity = (inverted: Uint8Array, literal: Literal): number =>
  literal < 2 ? 0 : (literal & 1) ^ inverted[literal >>> 1]!;

function fall({ nodeCount, op, a, b, c }: Logic, states: Uint8Array): Uint8Array {
  const inverted = new Uint8Array(nodeCount);
  for (let node = 1; node < nodeCount; node++) {
    const of = (literal: Literal): number => parity(inverted, literal);
    if (op[node] === LogicOp.State) inverted[node] = states[a[node]!]!;
    else if (op[node] === LogicOp.And) inverted[node] = of(a[node]!) & of(b[node]!);
    else if (op[node] === LogicOp.Xor) inverted[node] = of(a[node]!) ^ of(b[node]!);
    else if (op[node] === LogicOp.Mux) {
      // With the select kept inverted, the data operands change places.
      inverted[node] = of(of(a[node]!) === 0 ? b[node]! : c[node]!);
    }
  }
  return inverted;
}

// Nodes whose other polarity is stored somewhere.
function inversions(logic: Logic, inverted: Uint8Array, states: Uint8Array): number {
  const needed = new Set<number>();
  for (const [bit, literal] of logic.next.entries()) {
    if (literal > 1 && parity(inverted, literal) !== states[bit]) needed.add(literal >>> 1);
  }
  for (const literal of [...logic.outputs, ...logic.faults.map(({ when }) => when)]) {
    if (parity(inverted, literal) === 1) needed.add(literal >>> 1);
  }
  return needed.size;
}
