import type { Diagram } from '../../circuit/tables/diagram.js';
import { Leaf } from '../../circuit/tables/diagram.js';
import type { Algebra, NetValue } from './algebra.js';

/** The value of a function that a diagram holds, for values of its variables in any algebra. */
export function diagramValue(
  algebra: Algebra,
  diagram: Diagram,
  root: number,
  valueAt: (variable: number) => NetValue,
): NetValue {
  const known = new Map<number, NetValue>();
  // As deep as a cell has inputs.
  const visit = (ref: number): NetValue => {
    if (ref === Leaf.Zero) return algebra.zero;
    if (ref === Leaf.One) return algebra.one;
    if (ref === Leaf.Unknown) return algebra.unknown;
    if (ref === Leaf.Hold) return valueAt(diagram.state);
    const seen = known.get(ref);
    if (seen !== undefined) return seen;
    const made = branched(ref);
    known.set(ref, made);
    return made;
  };
  const branched = (node: number): NetValue => {
    const select = valueAt(diagram.variable(node));
    const at = (value: number): NetValue => visit(diagram.branch(node, value));
    if (select === algebra.zero) return at(0);
    if (select === algebra.one) return at(1);
    if (!algebra.hasUnknown) return algebra.mux(select, at(0), at(1));
    if (select === algebra.unknown) return at(2);
    return algebra.pick(select, at(0), at(1), at(2));
  };
  return visit(root);
}
