import { type Literal, type Logic, LogicOp } from '../../logic/logic.js';
import { LogicBuilder } from '../../logic/logicBuilder.js';
import { builtNode } from '../../logic/rebuild.js';
import { mapEffects, sinksOf } from '../../logic/sinks.js';
import { Network, NodeKind } from './network.js';

/** A logic graph as a network. */
export interface Drawn {
  readonly logic: Logic;
  readonly network: Network;
  /** Per node of the logic, its literal in the network. */
  readonly literals: Uint32Array;
  /** Per node of the network that is a leaf, the node of the logic. */
  readonly leaves: ReadonlyMap<number, number>;
}

/**
 * Draws a logic graph as a network. A multiplexer becomes `e ^ (s & (t ^ e))`; memories are leaves,
 * and what they read are sinks.
 */
export function networkOf(logic: Logic): Drawn {
  const { op, a, b, c, nodeCount } = logic;
  const network = new Network();
  const literals = new Uint32Array(nodeCount);
  const leaves = new Map<number, number>([[0, 0]]);
  const of = (literal: Literal): Literal => literals[literal >>> 1]! ^ (literal & 1);
  for (let node = 1; node < nodeCount; node++) {
    const kind = op[node]!;
    if (kind < LogicOp.And || kind > LogicOp.Mux) {
      literals[node] = network.leaf();
      leaves.set(literals[node]! >>> 1, node);
      continue;
    }
    const [p, q] = [of(a[node]!), of(b[node]!)];
    if (kind === LogicOp.And) literals[node] = network.and(p, q);
    else if (kind === LogicOp.Xor) literals[node] = network.xor(p, q);
    else literals[node] = network.xor(q, network.and(p, network.xor(q, of(c[node]!))));
  }
  for (const sink of sinksOf(logic)) network.read(of(sink));
  for (let node = 1; node < nodeCount; node++) {
    for (const operand of wordOperands(logic, node)) network.read(of(operand));
  }
  return { logic, network, literals, leaves };
}

// What a node of a memory reads.
function wordOperands({ op, a, b }: Logic, node: number): Literal[] {
  return op[node]! > LogicOp.Mux ? [a[node]!, b[node]!] : [];
}

/** The logic graph that a network stands for now, without what nothing reads. */
export function logicFrom({ logic, network, literals, leaves }: Drawn): Logic {
  const builder = new LogicBuilder({ recover: false });
  const made = new Int32Array(network.nodeCount).fill(-1);
  made[0] = 0;
  const here = (literal: Literal): Literal => network.now(literals[literal >>> 1]! ^ (literal & 1));
  const moved = (literal: Literal): Literal => made[literal >>> 1]! ^ (literal & 1);
  const waiting: number[] = [];
  const operandsOf = (node: number): Literal[] => {
    if (network.kind(node) === NodeKind.Leaf) {
      return wordOperands(logic, leaves.get(node)!).map(here);
    }
    const mux = muxAt(network, node);
    return mux ? [...mux] : [network.left(node), network.right(node)];
  };
  const make = (node: number): Literal => {
    if (network.kind(node) === NodeKind.Leaf) {
      return builtNode(builder, logic, leaves.get(node)!, (literal) => moved(here(literal)));
    }
    const mux = muxAt(network, node);
    if (mux) return builder.mux(moved(mux[0]), moved(mux[1]), moved(mux[2]));
    const [p, q] = [moved(network.left(node)), moved(network.right(node))];
    return network.kind(node) === NodeKind.And ? builder.and(p, q) : builder.xor(p, q);
  };
  const build = (literal: Literal): Literal => {
    waiting.push(literal >>> 1);
    while (waiting.length > 0) {
      const node = waiting[waiting.length - 1]!;
      const missing = made[node]! >= 0 ? [] : operandsOf(node).filter((p) => made[p >>> 1]! < 0);
      for (const operand of missing) waiting.push(operand >>> 1);
      if (missing.length > 0) continue;
      waiting.pop();
      if (made[node]! < 0) made[node] = make(node);
    }
    return moved(literal);
  };
  const outputs = logic.outputs.map((literal) => build(here(literal)));
  const next = logic.next.map((literal) => build(here(literal)));
  const effects = mapEffects(logic, (literal) => build(here(literal)));
  const columns = builder.take();
  return { ...logic, ...columns, nodeCount: columns.op.length, outputs, next, ...effects };
}

// Whether an exclusive-or is a multiplexer none of whose parts is read elsewhere: `select`, `zero`
// and `one`.
function muxAt(network: Network, node: number): [Literal, Literal, Literal] | undefined {
  if (network.kind(node) !== NodeKind.Xor) return undefined;
  const [left, right] = [network.left(node), network.right(node)];
  return muxOf(network, left, right) ?? muxOf(network, right, left);
}

function muxOf(
  network: Network,
  zero: Literal,
  chosen: Literal,
): [Literal, Literal, Literal] | undefined {
  const and = chosen >>> 1;
  if (network.kind(and) !== NodeKind.And || network.readers(and) > 1) return undefined;
  const [p, q] = [network.left(and), network.right(and)];
  for (const [select, differ] of [
    [p, q],
    [q, p],
  ] as const) {
    const xor = differ >>> 1;
    if (network.kind(xor) !== NodeKind.Xor || network.readers(xor) > 1) continue;
    const [r, s] = [network.left(xor), network.right(xor)];
    // zero ^ (select & (one ^ zero)), inverted where `chosen` is.
    const turned = (zero ^ chosen) & 1;
    for (const [same, other] of [
      [r, s],
      [s, r],
    ] as const) {
      if (same >>> 1 !== zero >>> 1) continue;
      const plain = zero & ~1;
      const one = other ^ ((same ^ differ) & 1);
      return [select, plain ^ turned, one ^ turned];
    }
  }
  return undefined;
}
