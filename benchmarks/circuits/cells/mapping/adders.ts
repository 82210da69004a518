import type { LogicGraph } from './logicGraph.js';
import type { LocalNet } from './structure.js';

/** A full adder, or a half adder where there is no `ci`. */
export interface Adder {
  readonly a: LocalNet;
  readonly b: LocalNet;
  readonly ci: LocalNet | undefined;
  readonly s: LocalNet;
  readonly co: LocalNet;
}

/**
 * Takes adders out of the logic: full ones where the gates between are read by nothing else, then
 * half ones. `roots` are nets that something other than gates reads.
 */
export function takeAdders(graph: LogicGraph, roots: ReadonlySet<LocalNet>): Adder[] {
  const fanOut = graph.fanOut();
  const byInputs = new Map<string, LocalNet>();
  const readers = new Map<LocalNet, LocalNet[]>();
  for (const [net, { operator, inputs }] of graph.nodes) {
    byInputs.set(keyOf(operator, inputs), net);
    for (const input of inputs) readers.set(input, [...(readers.get(input) ?? []), net]);
  }
  const find = (operator: string, ...inputs: readonly LocalNet[]): LocalNet | undefined => {
    const net = byInputs.get(keyOf(operator, inputs));
    return net !== undefined && graph.nodes.has(net) ? net : undefined;
  };
  const isInner = (net: LocalNet, readers: number) =>
    !roots.has(net) && fanOut.get(net) === readers;
  const adders: Adder[] = [];
  const take = (adder: Adder, ...nets: readonly LocalNet[]): void => {
    adders.push(adder);
    for (const net of nets) graph.nodes.delete(net);
  };
  for (const { half, a, b, generate } of pairs(graph, find)) {
    if (!isInner(half, 2) || !isInner(generate, 1)) continue;
    for (const propagate of readers.get(half) ?? []) {
      const node = graph.nodes.get(propagate);
      if (node?.operator !== 'and') continue;
      const ci = node.inputs[node.inputs[0] === half ? 1 : 0]!;
      const s = find('xor', half, ci);
      const co = find('or', generate, propagate);
      if (s === undefined || co === undefined || !isInner(propagate, 1)) continue;
      take({ a, b, ci, s, co }, half, generate, propagate, s, co);
      break;
    }
  }
  for (const { half, a, b, generate } of pairs(graph, find)) {
    take({ a, b, ci: undefined, s: half, co: generate }, half, generate);
  }
  return adders;
}

function keyOf(operator: string, inputs: readonly LocalNet[]): string {
  return `${operator} ${inputs.toSorted((a, b) => a - b).join(' ')}`;
}

/** The sum and the product of the same two nets. */
function* pairs(
  graph: LogicGraph,
  find: (operator: string, ...inputs: readonly LocalNet[]) => LocalNet | undefined,
) {
  for (const [half, { operator, inputs }] of [...graph.nodes]) {
    if (operator !== 'xor' || !graph.nodes.has(half)) continue;
    const [a, b] = inputs as readonly [LocalNet, LocalNet];
    const generate = find('and', a, b);
    if (generate !== undefined) yield { half, a, b, generate };
  }
}
