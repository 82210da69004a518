import { GateKind } from '../../../circuit/gates.js';
import { type NetId, netId } from '../../../circuit/ids.js';
import type { PrimitiveSyntax } from '../syntax.js';
import type { Design } from './design.js';
import { PrimitiveTable } from './primitiveTable.js';
import type { Recording } from './recording.js';
import { lowerSequential } from './sequentialPrimitive.js';
import { buildTruthTable, truthTable } from './truthTable.js';

/** Tables are looked through for every combination of their inputs: 2^12 of them at most. */
const MAX_INPUTS = 12;

/**
 * Builds the logic of a primitive: its output is net `first`, its inputs are the nets after it.
 *
 * Exact where all inputs are 0 or 1; a combination without a row, which gives x in the standard,
 * gives 0 (IEEE 1364-2005, clause 8).
 */
export function lowerPrimitive(
  design: Design,
  primitive: PrimitiveSyntax,
  recording: Recording,
  first: NetId,
): void {
  const { ports, rows, sequential, initial } = primitive;
  const inputs = ports.slice(1).map((_, place) => netId(first + 1 + place));
  const refuse = (reason: string): void => {
    const message = `primitive ${design.text(primitive.name)} is not supported: ${reason}`;
    design.diagnostics.add('not-supported', message, design.wordSpan(primitive.nameStart));
  };
  if (inputs.length > MAX_INPUTS) {
    refuse(`it has ${inputs.length} inputs, more than ${MAX_INPUTS}; split it`);
    return;
  }
  const table = new PrimitiveTable(rows, inputs.length);
  if (!sequential) {
    const column = truthTable(inputs.length, (levels) => table.level(levels, 0) === '1');
    recording.drive(first, GateKind.Buf, [buildTruthTable(column, inputs, recording)]);
    return;
  }
  const names = ports.slice(1).map((name) => design.text(name));
  const pins = { output: first, inputs, names, initial: initial ?? 2 };
  const reason = lowerSequential(table, pins, recording);
  if (reason !== undefined) refuse(reason);
}
