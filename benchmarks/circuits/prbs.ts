import { Module } from './netlistWriter.js';

/** A pseudo-random bit sequence: stages `order` and `tap` of the shift register are fed back. */
export interface Sequence {
  readonly order: number;
  readonly tap: number;
  /** Whether the line signal is the inverted last stage. */
  readonly inverted: boolean;
}

/**
 * The sequences of ITU-T O.150, section 5, of the orders 9, 15, 20, 23 and 31, and x^7 + x^6 + 1,
 * which is in common use beside them. Values from memory.
 */
export const sequences: readonly Sequence[] = [
  { order: 7, tap: 6, inverted: false },
  { order: 9, tap: 5, inverted: false },
  { order: 15, tap: 14, inverted: true },
  { order: 20, tap: 3, inverted: false },
  { order: 23, tap: 18, inverted: true },
  { order: 31, tap: 28, inverted: true },
];

/**
 * A generator `prbs` with input `clk` and outputs `serial`, the line signal, and `state`, where
 * `state[0]` is the first stage and the highest bit the last. It runs from power-up, from all
 * ones, with period 2^order - 1. Throws a RangeError for an order that `sequences` lacks.
 */
export function prbs(order: number): Module {
  const sequence = sequences.find((s) => s.order === order);
  if (!sequence) {
    const orders = sequences.map((s) => s.order).join(', ');
    throw new RangeError(`expected order to be one of ${orders}, got ${order}`);
  }
  const m = new Module('prbs');
  const clk = m.input('clk');
  const stages = m.wires('stages', order);
  const lastStage = stages[order - 1]!;
  const feedback = m.named('feedback', m.xor(lastStage, stages[sequence.tap - 1]!));
  const allOnes = (1n << BigInt(order)) - 1n;
  m.flipFlops(stages, [feedback, ...stages.slice(0, -1)], { clock: clk, value: allOnes });
  m.output('serial', m.gate(sequence.inverted ? 'not' : 'buf', [lastStage]));
  m.output('state', stages);
  return m;
}
