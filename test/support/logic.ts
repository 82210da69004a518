import type { Circuit } from '../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../compiler/circuit/clockPorts.js';
import {
  type Literal,
  type Logic,
  LogicOp,
  type LogicState,
  UPDATE_WIDTH,
} from '../../compiler/logic/logic.js';
import type { LogicOptions } from '../../compiler/logic/logicBuilder.js';
import { transition } from '../../compiler/passes/transition/transition.js';

/** The cycle of a circuit as logic. */
export const logicOf = (circuit: Circuit, options: LogicOptions & { threeValued?: boolean } = {}) =>
  transition(circuit, findClockPorts(circuit), options);

/** What a logic graph computes: values of outputs and next states, bit 0 to 31 a trial each. */
export interface LogicValues {
  readonly outputs: number[];
  readonly next: number[];
}

/**
 * Evaluates a logic graph node by node for 32 trials at once. `seed` gives every input and state
 * the same values in every graph: an input by its index, a state by what it holds.
 */
export function evaluateLogic(logic: Logic, seed: number): LogicValues {
  const value = new Int32Array(logic.nodeCount);
  const of = (literal: Literal): number => value[literal >>> 1]! ^ -(literal & 1);
  for (let node = 1; node < logic.nodeCount; node++) {
    const a = logic.a[node]!;
    const b = logic.b[node]!;
    if (logic.op[node] === LogicOp.Input) value[node] = scramble(seed, 1, a);
    else if (logic.op[node] === LogicOp.State) {
      value[node] = stateWord(seed, logic.states[a]!);
    } else if (logic.op[node] === LogicOp.And) value[node] = of(a) & of(b);
    else if (logic.op[node] === LogicOp.Xor) value[node] = of(a) ^ of(b);
    else value[node] = (of(a) & of(logic.c[node]!)) | (~of(a) & of(b));
  }
  const next = logic.next.map(of);
  const old = logic.states.map((state) => stateWord(seed, state));
  for (const { first, enable, gate, from } of logic.updates) {
    for (let bit = first; bit < first + UPDATE_WIDTH; bit++) {
      const data = from < 0 ? next[bit]! : old[from + bit - first]!;
      next[bit] = of(gate) & ((of(enable) & data) | (~of(enable) & old[bit]!));
    }
  }
  return { outputs: logic.outputs.map(of), next };
}

const stateWord = (seed: number, { role, index }: LogicState): number =>
  scramble(seed, role.length * 17 + role.charCodeAt(0), index);

/** A well mixed word for three numbers; the mixing is that of MurmurHash3's finalizer. */
function scramble(seed: number, kind: number, index: number): number {
  let h =
    Math.imul(seed + 1, 0x9e3779b1) ^
    Math.imul(kind, 0x85ebca6b) ^
    Math.imul(index + 1, 0xc2b2ae35);
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}
