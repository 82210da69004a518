import { type Logic, LogicOp } from '../../logic/logic.js';
import { randomWords, Signatures, simulate } from '../../logic/simulate.js';

const CYCLES = 96;

/**
 * Runs 32 sequences of random inputs side by side from one state, and gives a number per state bit
 * that is the same for bits that have always been equal, or opposite, beginning with their start;
 * 0 for a bit that has never left it.
 */
export function signaturesOf(logic: Logic, start: Uint8Array): Float64Array {
  const { op, a, next } = logic;
  const state = Int32Array.from(start, (bit) => -bit);
  const value = new Int32Array(logic.nodeCount);
  const random = randomWords();
  const signatures = new Signatures(state.length);
  for (let cycle = 0; cycle < CYCLES; cycle++) {
    simulate(logic, value, (node) => (op[node] === LogicOp.State ? state[a[node]!]! : random()));
    for (const [bit, literal] of next.entries()) {
      state[bit] = value[literal >>> 1]! ^ -(literal & 1);
      signatures.add(bit, state[bit]! ^ -start[bit]!);
    }
  }
  return signatures.take();
}
