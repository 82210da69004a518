import { type Literal, type Logic, LogicOp, TRUE } from '../../logic/logic.js';

/** The next value of a state bit taken apart: `gate & (enable ? data : old)`. */
export interface Recipe {
  readonly gate: Literal;
  readonly enable: Literal;
  readonly data: Literal;
}

/** A literal gates or enables a group only if at least so many state bits have it. */
const SHARED = 8;

/** Takes the next values of all state bits apart, as far as many bits share a gate or an enable. */
export function recipesOf(logic: Logic): Recipe[] {
  const gates = new Map<Literal, number>();
  const stateOf = (literal: Literal): number =>
    logic.op[literal >>> 1] === LogicOp.State ? logic.a[literal >>> 1]! : -1;
  for (const next of logic.next) {
    for (const gate of gatesOf(logic, next)) gates.set(gate, (gates.get(gate) ?? 0) + 1);
  }
  const gated = logic.next.map((next) => withoutGate(logic, next, gates));
  const held = gated.map(({ gate, data }, bit) => {
    const hold = withoutHold(logic, data, (literal) => stateOf(literal) === bit && !(literal & 1));
    return { gate, ...hold };
  });
  const enables = new Map<Literal, number>();
  for (const { enable } of held) enables.set(enable, (enables.get(enable) ?? 0) + 1);
  // An enable that few have saves less as a vector than it costs to bring it there.
  return held.map((recipe, bit) =>
    enables.get(recipe.enable)! >= SHARED
      ? recipe
      : { gate: recipe.gate, enable: TRUE, data: gated[bit]!.data },
  );
}

function gatesOf(logic: Logic, next: Literal): Literal[] {
  const node = next >>> 1;
  if ((next & 1) === 1 || logic.op[node] !== LogicOp.And) return [];
  return [logic.a[node]!, logic.b[node]!];
}

function withoutGate(
  logic: Logic,
  next: Literal,
  counts: ReadonlyMap<Literal, number>,
): { gate: Literal; data: Literal } {
  const [a, b] = gatesOf(logic, next);
  if (a === undefined || b === undefined) return { gate: TRUE, data: next };
  const [gate, data] = counts.get(a)! >= counts.get(b)! ? [a, b] : [b, a];
  return counts.get(gate)! >= SHARED ? { gate, data } : { gate: TRUE, data: next };
}

function withoutHold(
  logic: Logic,
  next: Literal,
  isOld: (literal: Literal) => boolean,
): { enable: Literal; data: Literal } {
  const node = next >>> 1;
  if (logic.op[node] !== LogicOp.Mux) return { enable: TRUE, data: next };
  const zero = logic.b[node]! ^ (next & 1);
  const one = logic.c[node]! ^ (next & 1);
  if (isOld(zero)) return { enable: logic.a[node]!, data: one };
  if (isOld(one)) return { enable: logic.a[node]! ^ 1, data: zero };
  return { enable: TRUE, data: next };
}
