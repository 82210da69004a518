import { type Logic, LogicOp } from '../../logic/logic.js';

/** Up to how many operations deep cones are compared, before they are compared whole. */
const DEPTHS = 12;

/** The index of the shapes of whole cones. */
export const WHOLE_SHAPE = DEPTHS + 1;

/**
 * For each depth from 0 on, and at last for whole cones, a number per node that is the same for
 * nodes whose cones look alike so far: the same operations and inversions, whatever they read
 * further down.
 */
export function shapesOf(logic: Logic): readonly Uint32Array[] {
  const shapes: Uint32Array[] = [Uint32Array.from(logic.op, (op) => mix(op + 1, 0))];
  for (let depth = 1; depth <= DEPTHS; depth++) {
    shapes.push(deeper(logic, shapes[depth - 1]!, new Uint32Array(logic.nodeCount)));
  }
  // Operands come before their users: one walk that reads what it has just written is all depths.
  const whole = shapes[0]!.slice();
  shapes.push(deeper(logic, whole, whole));
  return shapes;
}

function deeper(
  { op, a, b, c, nodeCount }: Logic,
  shape: Uint32Array,
  next: Uint32Array,
): Uint32Array {
  const of = (literal: number): number => mix(shape[literal >>> 1]!, literal & 1);
  for (let node = 0; node < nodeCount; node++) {
    const kind = op[node]!;
    if (kind < LogicOp.And) next[node] = shape[node]!;
    else if (kind === LogicOp.Mux) {
      next[node] = mix(of(a[node]!), mix(of(b[node]!), mix(of(c[node]!), kind)));
    } else {
      // The operands of and and exclusive-or have no order.
      const p = of(a[node]!);
      const q = of(b[node]!);
      next[node] = mix(Math.min(p, q), mix(Math.max(p, q), kind));
    }
  }
  return next;
}

function mix(value: number, into: number): number {
  let h = Math.imul(value ^ Math.imul(into, 0x9e3779b1) ^ 0x7f4a7c15, 0x85ebca6b);
  h ^= h >>> 13;
  h = Math.imul(h, 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
}

/** Length of the longest chain of operations under each node. */
export function heightsOf({ op, a, b, c, nodeCount }: Logic): Uint32Array {
  const height = new Uint32Array(nodeCount);
  for (let node = 0; node < nodeCount; node++) {
    if (op[node]! < LogicOp.And) continue;
    let below = Math.max(height[a[node]! >>> 1]!, height[b[node]! >>> 1]!);
    if (op[node] === LogicOp.Mux) below = Math.max(below, height[c[node]! >>> 1]!);
    height[node] = below + 1;
  }
  return height;
}
