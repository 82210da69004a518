import { type Literal, type Logic, LogicOp } from './logic.js';
import type { LogicBuilder } from './logicBuilder.js';
import { mapEffects } from './sinks.js';

/** Gives the literal that stands for a literal of the graph before. */
export type Mover = (literal: Literal) => Literal;

/**
 * Builds a logic graph anew, from the inputs on. `replace` is told each node and the literal that
 * has been built for it, and returns the one to take in its place.
 */
export function rebuildInto(
  builder: LogicBuilder,
  logic: Logic,
  replace: (node: number, built: Literal, moved: Mover) => Literal,
): Logic {
  const literals = new Uint32Array(logic.nodeCount);
  const moved: Mover = (literal) => literals[literal >>> 1]! ^ (literal & 1);
  for (let node = 1; node < logic.nodeCount; node++) {
    literals[node] = replace(node, builtNode(builder, logic, node, moved), moved);
  }
  const columns = builder.take();
  return {
    ...logic,
    ...columns,
    nodeCount: columns.op.length,
    outputs: logic.outputs.map(moved),
    next: logic.next.map(moved),
    ...mapEffects(logic, moved),
  };
}

/** Builds one node of a graph, whose operands have been built before. */
export function builtNode(
  builder: LogicBuilder,
  { op, a, b, c }: Logic,
  node: number,
  moved: Mover,
): Literal {
  const kind = op[node]!;
  if (kind === LogicOp.Input) return builder.input(a[node]!);
  if (kind === LogicOp.State) return builder.state(a[node]!);
  const p = moved(a[node]!);
  const q = moved(b[node]!);
  if (kind === LogicOp.And) return builder.and(p, q);
  if (kind === LogicOp.Xor) return builder.xor(p, q);
  if (kind === LogicOp.Mux) return builder.mux(p, q, moved(c[node]!));
  if (kind === LogicOp.Pack) return builder.longer(p, q);
  if (kind === LogicOp.Load) return builder.load(c[node]!, p, q);
  return builder.bit(p, c[node]!);
}
