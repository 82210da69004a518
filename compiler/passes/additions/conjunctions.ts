import { FALSE, isInverted, type Literal, type Logic, LogicOp, TRUE } from '../../logic/logic.js';
import type { Addition } from './addition.js';
import { deadNodes } from './deadNodes.js';

/** Ands of fewer bits are left alone, and those that leave no bit for the carry. */
const LEAST_BITS = 8;
const MOST_BITS = 63;

/**
 * Ands of all bits of a number that is added anyway, or of their inverses, as for a counter that is
 * at its last value or at 0: one more than the number has a carry where all its bits are 1.
 */
export function conjunctionsOf(logic: Logic, additions: readonly Addition[]): Addition[] {
  const wanted = new Map<number, Literal[][]>();
  for (const word of additions.flatMap(({ words }) => words)) {
    const end = word.indexOf(FALSE);
    const bits = end < 0 ? [...word] : word.slice(0, end);
    if (bits.length < LEAST_BITS || bits.length > MOST_BITS) continue;
    for (const each of [bits, bits.map((literal) => literal ^ 1)]) {
      const mark = each.reduce((sum, literal) => (sum + markOf(literal)) >>> 0, 0);
      wanted.set(mark, [...(wanted.get(mark) ?? []), each]);
    }
  }
  if (wanted.size === 0) return [];
  const isDead = deadNodes(logic, additions);
  const isSum = new Set(additions.flatMap(({ sum }) => sum.map((literal) => literal >>> 1)));
  // Bits of numbers are not taken apart.
  const isBit = new Set([...wanted.values()].flat(2));
  const marks = new Uint32Array(logic.nodeCount);
  const found: Addition[] = [];
  for (let node = 1; node < logic.nodeCount; node++) {
    if (logic.op[node] !== LogicOp.And) continue;
    const [a, b] = [logic.a[node]!, logic.b[node]!];
    const of = (literal: Literal): number =>
      isAnd(logic, literal) && !isBit.has(literal) ? marks[literal >>> 1]! : markOf(literal);
    marks[node] = of(a) + of(b);
    if (isDead[node] === 1 || isSum.has(node)) continue;
    const bits = wanted.get(marks[node]!)?.find((each) => isAndOf(logic, node, each));
    if (bits === undefined) continue;
    const sum = [...new Array<Literal>(bits.length).fill(-1), node * 2];
    found.push({ width: sum.length, words: [[...bits, FALSE]], constant: BigInt(TRUE), sum });
  }
  return found;
}

const isAnd = ({ op }: Logic, literal: Literal): boolean =>
  !isInverted(literal) && op[literal >>> 1] === LogicOp.And;

// Any mixing will do that sets sums of different literals apart.
function markOf(literal: Literal): number {
  const mixed = Math.imul(literal ^ (literal >>> 7), 0x9e3779b1);
  return Math.imul(mixed ^ (mixed >>> 15), 0x85ebca6b) >>> 0;
}

// Whether a node is the and of these literals; the marks said so.
function isAndOf(logic: Logic, node: number, bits: readonly Literal[]): boolean {
  const open = new Set(bits);
  const stack = [node * 2];
  for (let literal = stack.pop(); literal !== undefined; literal = stack.pop()) {
    if (open.delete(literal)) continue;
    if (!isAnd(logic, literal)) return false;
    stack.push(logic.a[literal >>> 1]!, logic.b[literal >>> 1]!);
  }
  return open.size === 0;
}
