import { type Literal, LogicOp, nodeOf } from '../../logic/logic.js';
import { NO_NODE, type Packs, type Tuple } from './packs.js';

/**
 * The operand tuples of nodes of one operation. Operands of and and exclusive-or change places where
 * that makes them more like those of the first lane.
 */
export function alignedOperands(
  packs: Packs,
  nodes: readonly number[],
  shapes: readonly Uint32Array[],
): Tuple[] {
  const { op, a, b, c } = packs.logic;
  const leader = nodes.find((node) => node !== NO_NODE)!;
  const first: Literal[] = [];
  const second: Literal[] = [];
  const third: Literal[] = [];
  const leads = [a[leader]!, b[leader]!] as const;
  for (const node of nodes) {
    let [p, q, r] = node < 0 ? [-1, -1, -1] : [a[node]!, b[node]!, c[node]!];
    if (node >= 0 && op[node] !== LogicOp.Mux) {
      const straight = likeness(packs, shapes, p, leads[0]) + likeness(packs, shapes, q, leads[1]);
      const crossed = likeness(packs, shapes, q, leads[0]) + likeness(packs, shapes, p, leads[1]);
      if (crossed > straight) [p, q] = [q, p];
    }
    first.push(p);
    second.push(q);
    third.push(r);
  }
  return op[leader] === LogicOp.Mux ? [first, second, third] : [first, second];
}

// How well two literals go together in one tuple.
function likeness(
  { packOf }: Packs,
  shapes: readonly Uint32Array[],
  p: Literal,
  q: Literal,
): number {
  const [left, right] = [nodeOf(p), nodeOf(q)];
  const polarity = Number(((p ^ q) & 1) === 0) / 2;
  if (left === right) return 30 + polarity;
  if (packOf[left]! >= 0 || packOf[right]! >= 0) {
    return (packOf[left] === packOf[right] ? 20 : 0) + polarity;
  }
  let depth = 0;
  while (depth < shapes.length && shapes[depth]![left] === shapes[depth]![right]) depth++;
  return depth + polarity;
}
