import { type Diagram, Leaf } from './diagram.js';
import { beforeOf } from './tableRows.js';

/** A change of an input to a value, and what becomes of the state by it. */
interface Arrival {
  /** -1 once it does not matter any more. */
  readonly input: number;
  readonly value: number;
  readonly ref: number;
}

/**
 * What the levels of some inputs decide whichever input has changed, whatever the others are, and
 * however often they are asked: this part of a table acts while the logic settles, as the set of a
 * register and the open latch do. Elsewhere it is no change.
 *
 * `events` has the function of a change of each input; `levels` the inputs, which come first in
 * the diagram's order.
 */
export function settledPart(
  diagram: Diagram,
  events: readonly number[],
  levels: readonly number[],
): number {
  const build = (place: number, arrivals: readonly Arrival[]): number => {
    const common = commonEnd(diagram, arrivals);
    if (common !== undefined) return common;
    const input = levels[place];
    if (input === undefined) return Leaf.Hold;
    const at = (value: number): number =>
      build(place + 1, restricted(diagram, arrivals, input, value));
    return diagram.node(input, at(0), at(1), diagram.values === 3 ? at(2) : 0);
  };
  return build(0, arrivalsOf(diagram, events, levels));
}

function arrivalsOf(
  diagram: Diagram,
  events: readonly number[],
  levels: readonly number[],
): Arrival[] {
  const values = Array.from({ length: diagram.values }, (_, value) => value);
  const before = beforeOf(events.length);
  const all = events.flatMap((event, input) =>
    values.flatMap((value) => {
      const now = diagram.restrict(event, input, value);
      const others = values.filter((other) => other !== value);
      return others.map((other) => ({
        input: levels.includes(input) ? input : -1,
        value,
        ref: diagram.restrict(now, before, other),
      }));
    }),
  );
  return distinct(all);
}

function restricted(
  diagram: Diagram,
  arrivals: readonly Arrival[],
  input: number,
  value: number,
): Arrival[] {
  const fitting = arrivals.filter((each) => each.input !== input || each.value === value);
  return distinct(
    fitting.map((each) => ({
      input: each.input === input ? -1 : each.input,
      value: each.value,
      ref: diagram.restrict(each.ref, input, value),
    })),
  );
}

function distinct(arrivals: readonly Arrival[]): Arrival[] {
  const keyed = arrivals.map((each) => {
    const { input, value, ref } = each;
    return [input < 0 ? `${ref}` : `${input} ${value} ${ref}`, each] as const;
  });
  return [...new Map(keyed).values()];
}

/** The one function of the state that all arrivals are, if asking twice does no more than once. */
function commonEnd(diagram: Diagram, arrivals: readonly Arrival[]): number | undefined {
  const ref = arrivals[0]?.ref;
  if (ref === undefined || arrivals.some((each) => each.ref !== ref)) return undefined;
  if (!diagram.isNode(ref)) return ref;
  if (diagram.variable(ref) !== diagram.state) return undefined;
  const branches = Array.from({ length: diagram.values }, (_, state) => diagram.branch(ref, state));
  const isIdempotent = branches.every((next) => diagram.branch(ref, next) === next);
  return isIdempotent ? ref : Leaf.Hold;
}

/**
 * A function of events without what `settled` decides anyway, which is left as no change.
 *
 * `forcing` tells where that may be done: where one of the inputs has such a value; everywhere
 * unless given.
 */
export function withoutSettled(
  diagram: Diagram,
  event: number,
  settled: number,
  levels: readonly number[],
  forcing?: ReadonlyMap<number, number>,
): number {
  const known = new Map<string, number>();
  const visit = (ref: number, part: number, place: number, forced: boolean): number => {
    if (part === Leaf.Hold || ref === Leaf.Hold) return ref;
    const input = levels[place];
    if (input === undefined) return forced ? Leaf.Hold : ref;
    const key = `${ref} ${part} ${place} ${forced}`;
    const seen = known.get(key);
    if (seen !== undefined) return seen;
    const at = (value: number): number =>
      visit(
        diagram.restrict(ref, input, value),
        diagram.restrict(part, input, value),
        place + 1,
        forced || forcing?.get(input) === value,
      );
    const made = diagram.node(input, at(0), at(1), diagram.values === 3 ? at(2) : 0);
    known.set(key, made);
    return made;
  };
  return visit(event, settled, 0, forcing === undefined);
}
