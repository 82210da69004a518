import { type Literal, type Logic, LogicOp } from '../logic/logic.js';
import { mapEffects, sinksOf } from '../logic/sinks.js';

/**
 * Removes nodes that nothing reads, and state bits that only remember an input nobody asks for.
 *
 * Registers and latches stay, read or not: their state can be looked at. With `keepsStates`, all
 * state bits stay, since other graphs share them. Order of nodes is kept.
 */
export function compact(logic: Logic, keepsStates = false): Logic {
  const live = new Uint8Array(logic.nodeCount);
  live[0] = 1;
  // Once state bits have been laid side by side, none of them goes any more.
  const keptState = logic.states.map(
    ({ role }) => keepsStates || role === 'value' || role === 'zero' || logic.updates.length > 0,
  );
  const next = logic.next.filter((_, bit) => keptState[bit]);
  markFrom(logic, live, sinksOf({ ...logic, next }));
  keepReadStates(logic, live, keptState);
  return rebuilt(logic, live, keptState);
}

// A remembered input that is read keeps alive what computes it, and so on until nothing is added.
function keepReadStates(logic: Logic, live: Uint8Array, keptState: boolean[]): void {
  for (let changed = true; changed; ) {
    changed = false;
    for (let node = 0; node < logic.nodeCount; node++) {
      const bit = logic.a[node]!;
      if (live[node] === 0 || logic.op[node] !== LogicOp.State || keptState[bit]) continue;
      keptState[bit] = true;
      changed = true;
      markFrom(logic, live, [logic.next[bit]!]);
    }
  }
}

function markFrom(logic: Logic, live: Uint8Array, roots: readonly Literal[]): void {
  const stack = roots.map((root) => root >>> 1);
  for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
    if (live[node] === 1) continue;
    live[node] = 1;
    if (logic.op[node]! < LogicOp.And) continue;
    stack.push(logic.a[node]! >>> 1, logic.b[node]! >>> 1);
    if (logic.op[node] === LogicOp.Mux) stack.push(logic.c[node]! >>> 1);
  }
}

function rebuilt(logic: Logic, live: Uint8Array, keptState: readonly boolean[]): Logic {
  const newState = new Int32Array(keptState.length);
  let stateCount = 0;
  keptState.forEach((kept, bit) => {
    newState[bit] = kept ? stateCount++ : -1;
  });
  const newNode = new Uint32Array(logic.nodeCount);
  let nodeCount = 0;
  for (let node = 0; node < logic.nodeCount; node++) if (live[node]) newNode[node] = nodeCount++;
  const op = new Uint8Array(nodeCount);
  const [a, b, c] = [0, 1, 2].map(() => new Uint32Array(nodeCount)) as [
    Uint32Array,
    Uint32Array,
    Uint32Array,
  ];
  const moved = (literal: Literal): Literal => newNode[literal >>> 1]! * 2 + (literal & 1);
  for (let node = 0; node < logic.nodeCount; node++) {
    if (live[node] === 0) continue;
    const n = newNode[node]!;
    op[n] = logic.op[node]!;
    if (op[n] === LogicOp.Input) a[n] = logic.a[node]!;
    else if (op[n] === LogicOp.State) a[n] = newState[logic.a[node]!]!;
    else if (op[n] !== LogicOp.Zero) {
      a[n] = moved(logic.a[node]!);
      b[n] = moved(logic.b[node]!);
      c[n] = op[n] === LogicOp.Mux ? moved(logic.c[node]!) : logic.c[node]!;
    }
  }
  return {
    ...logic,
    nodeCount,
    op,
    a,
    b,
    c,
    outputs: logic.outputs.map(moved),
    next: logic.next.filter((_, bit) => keptState[bit]).map(moved),
    states: logic.states.filter((_, bit) => keptState[bit]),
    ...mapEffects(logic, moved),
  };
}
