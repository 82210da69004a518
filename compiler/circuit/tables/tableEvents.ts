import { X } from '../values.js';
import { type Diagram, Leaf } from './diagram.js';
import { beforeOf, RowDiagrams, stateOf, type TableRow } from './tableRows.js';

/** Makes the functions of a change of each input in a diagram of a given order. */
export type EventSource = (diagram: Diagram, order: readonly number[]) => number[];

/** Changes as the rows of a table have them, x among their symbols. */
export const eventsOfRows =
  (rows: readonly TableRow[], inputs: number): EventSource =>
  (diagram, order) => {
    const diagrams = new RowDiagrams(diagram, order, inputs, rows);
    return Array.from({ length: inputs }, (_, input) => diagrams.event(input));
  };

/** The `Leaf` of a change of an input, for the levels after it (bit i is input i) and the state. */
export type Outcome = (input: number, levels: number, state: number) => number;

/**
 * Changes as a function of known values has them. With an x the outcome is what all values that the
 * x can stand for agree on, x otherwise; where a change may be none, it is what the levels give
 * whichever input has changed.
 */
export const eventsOfFunction =
  (outcome: Outcome, inputs: number): EventSource =>
  (diagram, order) =>
    Array.from({ length: inputs }, (_, input) => {
      const build = (place: number, levels: number, isStill: boolean): number => {
        const variable = order[place]!;
        if (variable === stateOf(inputs))
          return ofState(diagram, outcome, inputs, isStill ? -1 : input, levels);
        const at = (value: number): number =>
          variable === beforeOf(inputs)
            ? build(place + 1, levels, value === ((levels >> input) & 1))
            : build(place + 1, levels | (value << variable), false);
        const zero = at(0);
        const one = at(1);
        return diagram.node(variable, zero, one, merged(diagram, zero, one));
      };
      return withoutStays(diagram, build(0, 0, false), input, beforeOf(inputs));
    });

/** A function of the state alone: of a change, or of the levels for -1 in place of an input. */
function ofState(
  diagram: Diagram,
  outcome: Outcome,
  inputs: number,
  input: number,
  levels: number,
): number {
  const of = (changed: number): number => {
    const [zero, one] = [0, 1].map((state) => leaf(diagram, outcome(changed, levels, state)));
    const held = (ref: number, state: number): number => (ref === Leaf.Hold ? state : ref);
    const unknown = merged(diagram, held(zero!, 0), held(one!, 1));
    return diagram.node(diagram.state, zero!, one!, unknown);
  };
  if (input >= 0) return of(input);
  const given = of(0);
  for (let other = 1; other < inputs; other++) if (of(other) !== given) return Leaf.Hold;
  const twice = [0, 1].every((state) => {
    const next = diagram.restrict(given, diagram.state, state);
    return diagram.restrict(given, diagram.state, next) === next;
  });
  return twice ? given : Leaf.Hold;
}

const leaf = (diagram: Diagram, outcome: number): number =>
  diagram.values === 2 && outcome === Leaf.Unknown ? Leaf.Zero : outcome;

const merged = (diagram: Diagram, a: number, b: number): number => {
  if (diagram.values === 2) return a;
  return a === b ? a : diagram.compose([a, b], ([p, q]) => (p === q ? p! : X));
};

/** The function of a change without any where the input has its value before. */
function withoutStays(diagram: Diagram, root: number, input: number, before: number): number {
  const split = (
    ref: number,
    variable: number,
    branch: (ref: number, value: number) => number,
  ): number => {
    const isLater = !diagram.isNode(ref) || !diagram.asksBefore(diagram.variable(ref), variable);
    const [asked, at] = isLater
      ? [variable, (value: number) => branch(diagram.restrict(ref, variable, value), value)]
      : [
          diagram.variable(ref),
          (value: number) => split(diagram.branch(ref, value), variable, branch),
        ];
    return diagram.node(asked, at(0), at(1), diagram.values === 3 ? at(2) : 0);
  };
  return split(root, input, (now, value) =>
    split(now, before, (ref, old) => (old === value ? Leaf.Hold : ref)),
  );
}
