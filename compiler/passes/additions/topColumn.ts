import { type Literal, LogicOp } from '../../logic/logic.js';
import type { Uses } from './networks.js';

/** The highest bit of a sum, made of exclusive-ors alone, since nothing reads its carries. */
export interface TopBit {
  /** The exclusive-or of the literals that were to be joined, and of `inputs`. */
  readonly literal: Literal;
  readonly inputs: readonly Literal[];
}

/** What the inputs should be, to go with those of the column below. */
export interface Kinds {
  /** Whether a node looks like one of them. */
  readonly isUsual: (node: number) => boolean;
  /** Whether it is the neighbour of one of them. */
  readonly isNext: (node: number) => boolean;
}

/** Exclusive-ors that are gone up or down at most. */
const MOST_STEPS = 64;

/**
 * The exclusive-or in which all of some literals end and that nothing else reads, with what else
 * goes into it. It is taken apart until it has `wanted` inputs. Undefined where there is no such node.
 */
export function topBit(
  uses: Uses,
  carries: readonly Literal[],
  wanted: number,
  kinds: Kinds,
): TopBit | undefined {
  const inner = new Set<number>(carries.map((literal) => literal >>> 1));
  const ends = [...inner];
  let root = -1;
  for (let steps = 0; steps < MOST_STEPS; steps++) {
    // The lowest end cannot be above another one.
    ends.sort((p, q) => p - q);
    const reader = onlyReader(uses, ends[0]!);
    if (reader < 0) return undefined;
    ends.shift();
    if (!inner.has(reader)) {
      inner.add(reader);
      ends.push(reader);
    }
    if (ends.length > 1) continue;
    root = ends[0]!;
    break;
  }
  if (root < 0) return undefined;
  let found = taken(uses, root, carries, inner, wanted, kinds);
  for (let steps = 0; found.inputs.length < wanted && steps < wanted; steps++) {
    const above = onlyReader(uses, root);
    if (above < 0) break;
    inner.add(above);
    const more = taken(uses, above, carries, inner, wanted, kinds);
    if (more.inputs.length > wanted) break;
    [root, found] = [above, more];
  }
  return found;
}

// The exclusive-or that alone reads a node, or -1.
function onlyReader({ logic, adders, singleReads, adderReads, singleReader }: Uses, node: number) {
  if (singleReads[node] !== 1 || adderReads[node] !== 0) return -1;
  const reader = singleReader[node]!;
  if (reader < 0 || logic.op[reader] !== LogicOp.Xor || adders.ofNode[reader]! >= 0) return -1;
  return reader;
}

function taken(
  uses: Uses,
  root: number,
  carries: readonly Literal[],
  inner: ReadonlySet<number>,
  wanted: number,
  { isUsual, isNext }: Kinds,
): TopBit {
  const { a, b } = uses.logic;
  const isCarry = new Map(carries.map((literal) => [literal >>> 1, literal & 1]));
  let turned = 0;
  let open: Literal[] = [root * 2];
  const inputs: Literal[] = [];
  for (let literal = open.pop(); literal !== undefined; literal = open.pop()) {
    const node = literal >>> 1;
    turned ^= literal & 1;
    const carry = isCarry.get(node);
    if (carry !== undefined) turned ^= carry;
    else if (inner.has(node) || (canSplit(uses, node) && !isUsual(node))) {
      open.push(a[node]!, b[node]!);
    } else inputs.push(node * 2);
  }
  // Too few: what looks usual is taken apart too.
  while (inputs.length < wanted) {
    const splits = inputs.filter((literal) => canSplit(uses, literal >>> 1));
    const nextTo = (literal: Literal): number =>
      Number(isNext(a[literal >>> 1]! >>> 1)) + Number(isNext(b[literal >>> 1]! >>> 1));
    splits.sort((p, q) => nextTo(q) - nextTo(p));
    if (splits.length === 0) break;
    const at = inputs.indexOf(splits[0]!);
    const node = inputs[at]! >>> 1;
    open = [a[node]!, b[node]!];
    for (const literal of open) turned ^= literal & 1;
    inputs.splice(at, 1, ...open.map((literal) => literal & ~1));
  }
  return { literal: root * 2 + turned, inputs };
}

const canSplit = (uses: Uses, node: number): boolean =>
  uses.logic.op[node] === LogicOp.Xor &&
  uses.singleReads[node] === 1 &&
  uses.adderReads[node] === 0 &&
  uses.adders.ofNode[node]! < 0;
