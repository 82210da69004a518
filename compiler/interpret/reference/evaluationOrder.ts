import type { Dependencies } from './dependencies.js';

/** In which order nets settle: by level, and nets that depend on each other together. */
export interface EvaluationOrder {
  /** Per net; greater than the level of every net outside its loop that it depends on. */
  readonly level: Uint32Array;
  readonly levels: number;
  /** Per net: the loop it belongs to, or -1. */
  readonly loopOf: Int32Array;
  /** The nets of loop l by `place`: `loopNets[loopStart[l]] … loopNets[loopStart[l + 1] - 1]`. */
  readonly loopStart: Uint32Array;
  readonly loopNets: Uint32Array;
}

/** Orders the nets; a loop is a strongly connected component or a net that reads itself. */
export function evaluationOrder(
  netCount: number,
  dependencies: Dependencies,
  place: Uint32Array,
): EvaluationOrder {
  const { order, componentOf, componentStart } = strongComponents(netCount, dependencies);
  const loopOf = new Int32Array(netCount).fill(-1);
  const loopStart = [0];
  const loopNets: number[] = [];
  for (let c = 0; c + 1 < componentStart.length; c++) {
    const nets = order.subarray(componentStart[c]!, componentStart[c + 1]!);
    if (nets.length === 1 && !readsItself(nets[0]!, dependencies)) continue;
    for (const net of nets.slice().sort((a, b) => place[a]! - place[b]!)) {
      loopOf[net] = loopStart.length - 1;
      loopNets.push(net);
    }
    loopStart.push(loopNets.length);
  }
  const { level, levels } = levelsOf(order, componentOf, componentStart, dependencies);
  return {
    level,
    levels,
    loopOf,
    loopStart: Uint32Array.from(loopStart),
    loopNets: Uint32Array.from(loopNets),
  };
}

function readsItself(net: number, { readerStart, reader }: Dependencies): boolean {
  return reader.subarray(readerStart[net]!, readerStart[net + 1]!).includes(net);
}

interface Components {
  /** All nets, component by component; what depends on a component comes before it. */
  readonly order: Uint32Array;
  readonly componentOf: Int32Array;
  readonly componentStart: readonly number[];
}

/**
 * Strongly connected components after R. Tarjan, "Depth-first search and linear graph algorithms",
 * SIAM J. Comput. 1(2), 1972, with an explicit stack.
 */
function strongComponents(netCount: number, dependencies: Dependencies): Components {
  const { readerStart, reader } = dependencies;
  const order = new Uint32Array(netCount);
  const componentOf = new Int32Array(netCount).fill(-1);
  const componentStart = [0];
  const number = new Int32Array(netCount).fill(-1);
  const low = new Int32Array(netCount);
  const next = readerStart.slice(0, netCount);
  const open: number[] = [];
  const path: number[] = [];
  let visited = 0;
  let placed = 0;

  const enter = (net: number) => {
    number[net] = low[net] = visited++;
    open.push(net);
    path.push(net);
  };
  const leave = (net: number) => {
    path.pop();
    const parent = path[path.length - 1];
    if (parent !== undefined) low[parent] = Math.min(low[parent]!, low[net]!);
    if (low[net] !== number[net]) return;
    for (;;) {
      const member = open.pop()!;
      componentOf[member] = componentStart.length - 1;
      order[placed++] = member;
      if (member === net) break;
    }
    componentStart.push(placed);
  };

  for (let root = 0; root < netCount; root++) {
    if (number[root]! >= 0) continue;
    enter(root);
    while (path.length > 0) {
      const net = path[path.length - 1]!;
      if (next[net]! === readerStart[net + 1]!) {
        leave(net);
        continue;
      }
      const successor = reader[next[net]!++]!;
      if (number[successor]! < 0) enter(successor);
      else if (componentOf[successor]! < 0) low[net] = Math.min(low[net]!, number[successor]!);
    }
  }
  return { order, componentOf, componentStart };
}

function levelsOf(
  order: Uint32Array,
  componentOf: Int32Array,
  componentStart: readonly number[],
  { readerStart, reader }: Dependencies,
) {
  const componentLevel = new Uint32Array(componentStart.length - 1);
  const level = new Uint32Array(order.length);
  let levels = 1;
  for (let c = componentLevel.length - 1; c >= 0; c--) {
    const own = componentLevel[c]!;
    levels = Math.max(levels, own + 1);
    for (let i = componentStart[c]!; i < componentStart[c + 1]!; i++) {
      const net = order[i]!;
      level[net] = own;
      for (let r = readerStart[net]!; r < readerStart[net + 1]!; r++) {
        const other = componentOf[reader[r]!]!;
        if (other !== c) componentLevel[other] = Math.max(componentLevel[other]!, own + 1);
      }
    }
  }
  return { level, levels };
}
