import { GateKind, gateInfo } from '../../../circuit/gates.js';
import { type NetId, netId } from '../../../circuit/ids.js';
import { type Diagram, Leaf } from '../../../circuit/tables/diagram.js';
import { X } from '../../../circuit/values.js';
import type { GateSink } from '../scope.js';
import { buildTruthTable, type TruthTable } from './truthTable.js';

/** What the gates that `buildTruthTable` makes of a column do with 0, 1 and x, as a diagram. */
export function gateDiagram(diagram: Diagram, column: TruthTable, inputs: number): number {
  // Functions take the place of nets.
  const nets = Array.from({ length: inputs }, (_, input) => netId(diagram.valueOf(input)));
  return buildTruthTable(column, nets, { gate: (kind, fanin) => composed(diagram, kind, fanin) });
}

function composed(
  diagram: Diagram,
  kind: GateKind,
  fanin: readonly NetId[],
): ReturnType<GateSink['gate']> {
  if (kind === GateKind.Zero) return netId(Leaf.Zero);
  if (kind === GateKind.One) return netId(Leaf.One);
  return netId(diagram.compose(fanin, (values) => gateValue(kind, values)));
}

/** The gate tables of IEEE 1364-2005, 7.2 to 7.4, and for the multiplexer the operator of 5.1.13. */
function gateValue(kind: GateKind, values: readonly number[]): number {
  if (kind === GateKind.Mux) {
    const [select, zero, one] = values as [number, number, number];
    return select === 0 || zero === one ? zero : select === 1 ? one : X;
  }
  const { operation, inverted } = gateInfo(kind).fold!;
  const value = values.reduce((a, b) => folded(operation, a, b));
  return inverted && value !== X ? 1 - value : value;
}

function folded(operation: 'and' | 'or' | 'xor', a: number, b: number): number {
  if (operation === 'xor') return a === X || b === X ? X : a ^ b;
  const deciding = operation === 'and' ? 0 : 1;
  if (a === deciding || b === deciding) return deciding;
  return a === X || b === X ? X : 1 - deciding;
}
