import { FALSE, type Literal, type Logic, LogicOp, nodeOf } from '../../logic/logic.js';

/** How well a bit continues a word whose last bit is known. */
const Likeness = { nextBit: 40, sameNode: 20 } as const;

/**
 * Makes numbers of bits in columns: neighbouring state bits, input bits or bits of another sum next
 * to each other, and others with those whose cones look alike. Per number its bits, lowest first,
 * `FALSE` where it has none.
 */
export function wordsOf(
  logic: Logic,
  columns: readonly (readonly Literal[])[],
  shapes: readonly Uint32Array[],
  columnOf: ReadonlyMap<number, number>,
): Literal[][] {
  const count = Math.max(0, ...columns.map(({ length }) => length));
  const words = Array.from({ length: count }, () => new Array<Literal>(columns.length).fill(FALSE));
  const last: Literal[] = new Array<Literal>(count).fill(FALSE);
  for (const [column, bits] of columns.entries()) {
    const pairs = bits.flatMap((bit, from) =>
      last.map((before, word) => ({
        ...{ bit, from, word },
        score: before === FALSE ? -word : likeness(logic, shapes, columnOf, before, bit),
      })),
    );
    pairs.sort((p, q) => q.score - p.score);
    const taken = new Set<number>();
    const placed = new Set<number>();
    for (const { bit, from, word } of pairs) {
      if (taken.has(word) || placed.has(from)) continue;
      taken.add(word);
      placed.add(from);
      words[word]![column] = bit;
      last[word] = bit;
    }
  }
  return words;
}

function likeness(
  { op, a }: Logic,
  shapes: readonly Uint32Array[],
  columnOf: ReadonlyMap<number, number>,
  before: Literal,
  bit: Literal,
): number {
  const [p, q] = [nodeOf(before), nodeOf(bit)];
  const polarity = Number(((before ^ bit) & 1) === 0) / 2;
  if (p === q) return Likeness.sameNode + polarity;
  const isLeaf = op[p] === op[q] && (op[p] === LogicOp.State || op[p] === LogicOp.Input);
  if (isLeaf && a[q] === a[p]! + 1) return Likeness.nextBit + polarity;
  const [from, to] = [columnOf.get(p), columnOf.get(q)];
  if (from !== undefined && to === from + 1) return Likeness.nextBit + polarity;
  let depth = 0;
  while (depth < shapes.length && shapes[depth]![p] === shapes[depth]![q]) depth++;
  return depth + polarity;
}
