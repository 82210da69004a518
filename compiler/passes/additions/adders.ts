import { GrowableUint32 } from '../../circuit/growable.js';
import { FALSE, type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';
import { eachCut, majorityForm, PARITY } from './cuts.js';

/** Nothing computes this output of an adder. */
export const NO_OUTPUT = -1;

/**
 * A full adder: the three leaves add up to `sum + 2 * carry`. A half adder has `FALSE` for its third
 * leaf. All literals inverted, it is one too.
 */
export interface Adder {
  readonly leaves: readonly [Literal, Literal, Literal];
  /** `NO_OUTPUT` if nothing computes it. */
  readonly sum: Literal;
  readonly carry: Literal;
}

/** The adders of a graph, and which of them makes a node. */
export interface Adders {
  readonly list: readonly Adder[];
  /** Per node the adder of which it is the sum or the carry, or -1. */
  readonly ofNode: Int32Array;
}

/**
 * Finds nodes that are, proven by the truth tables of their cuts, the carry of a full adder (the
 * majority of three literals), with the node that is its sum (their exclusive-or) if there is one;
 * and pairs of an and and an exclusive-or of the same two literals. Where a node is an output of
 * several, the full adder counts.
 */
export function findAdders(logic: Logic): Adders {
  const list: Adder[] = [...fullAdders(logic), ...halfAdders(logic)];
  const ofNode = new Int32Array(logic.nodeCount).fill(-1);
  for (const [number, { sum, carry }] of list.entries()) {
    for (const literal of [sum, carry]) {
      if (literal >= 0 && ofNode[literal >>> 1] === -1) ofNode[literal >>> 1] = number;
    }
  }
  for (const number of loneMajorities(list, ofNode)) ofNode[list[number]!.carry >>> 1] = -1;
  return { list, ofNode };
}

// Majorities that are no carries: no sum beside them, and neither above nor below them in a chain.
function loneMajorities(list: readonly Adder[], ofNode: Int32Array): number[] {
  const isCarry = (literal: Literal): boolean => {
    const adder = ofNode[literal >>> 1]!;
    return adder >= 0 && list[adder]!.carry >>> 1 === literal >>> 1;
  };
  const sumless = list.filter(({ sum }) => sum === NO_OUTPUT);
  const below = new Set(sumless.flatMap(({ leaves }) => leaves.map(nodeOf)));
  return [...list.keys()].filter((number) => {
    const { sum, carry, leaves } = list[number]!;
    return sum === NO_OUTPUT && !leaves.some(isCarry) && !below.has(nodeOf(carry));
  });
}

function* fullAdders(logic: Logic): Generator<Adder> {
  // By the highest leaf, which few have in common.
  const carries = new Map<number, Majority[]>();
  const parities = new GrowableUint32();
  eachCut(logic, (node, { leaves, table }) => {
    const form = majorityForm(table);
    if (form < 0) {
      for (const value of [node, ...leaves, table]) parities.push(value);
      return;
    }
    const known = carries.get(leaves[2]) ?? [];
    carries.set(leaves[2], known);
    if (!known.some((each) => isSame(each.leaves, leaves))) {
      known.push({ node, leaves, form, sum: NO_OUTPUT });
    }
  });
  if (carries.size === 0) return;
  for (let i = 0; i < parities.length; i += 5) {
    const [node, p, q, r, table] = [0, 1, 2, 3, 4].map((k) => parities.get(i + k));
    const majority = carries.get(r!)?.find(({ leaves }) => isSame(leaves, [p!, q!, r!]));
    if (majority?.sum === NO_OUTPUT) majority.sum = node! * 2 + Number(table !== PARITY);
  }
  for (const { node, leaves, form, sum } of [...carries.values()].flat()) {
    const literals = leaves.map((leaf, i) => leaf * 2 + ((form >>> i) & 1));
    const turned = literals.reduce((parity, leaf) => parity ^ (leaf & 1), 0);
    yield {
      leaves: literals as [Literal, Literal, Literal],
      sum: sum === NO_OUTPUT ? sum : sum ^ turned,
      carry: node * 2 + (form >>> 3),
    };
  }
}

interface Majority {
  readonly node: number;
  readonly leaves: Leaves;
  readonly form: number;
  /** The exclusive-or of the plain leaves. */
  sum: Literal;
}

type Leaves = readonly [number, number, number];

const isSame = (p: Leaves, q: Leaves): boolean => p[0] === q[0] && p[1] === q[1] && p[2] === q[2];

function* halfAdders({ op, a, b, nodeCount }: Logic): Generator<Adder> {
  // Exclusive-ors by what they read: the last one of each slot, and the one before it.
  const slots = new Int32Array(2 ** Math.ceil(Math.log2(nodeCount + 1))).fill(-1);
  const before = new Int32Array(nodeCount);
  const slotOf = (node: number): number => {
    const [p, q] = [a[node]! >>> 1, b[node]! >>> 1];
    return (Math.imul(p + q, 0x9e3779b1) ^ Math.imul(p ^ q, 0x85ebca6b)) & (slots.length - 1);
  };
  for (let node = 1; node < nodeCount; node++) {
    if (op[node] !== LogicOp.Xor) continue;
    const slot = slotOf(node);
    before[node] = slots[slot]!;
    slots[slot] = node;
  }
  for (let node = 1; node < nodeCount; node++) {
    if (op[node] !== LogicOp.And) continue;
    const [p, q] = [a[node]! >>> 1, b[node]! >>> 1];
    for (let sum = slots[slotOf(node)]!; sum >= 0; sum = before[sum]!) {
      const [r, s] = [a[sum]! >>> 1, b[sum]! >>> 1];
      if (!((p === r && q === s) || (p === s && q === r))) continue;
      // The operands of an exclusive-or are not inverted.
      const turned = (a[node]! ^ b[node]!) & 1;
      yield { leaves: [a[node]!, b[node]!, FALSE], sum: sum * 2 + turned, carry: node * 2 };
      break;
    }
  }
}
