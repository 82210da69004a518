import { GateKind } from '../../../circuit/gates.js';
import type { NetId } from '../../../circuit/ids.js';
import { combinationalDiagram, combinationalTable } from '../../../circuit/tables/cellTable.js';
import { eventsOfRows } from '../../../circuit/tables/tableEvents.js';
import type { PrimitiveSyntax } from '../syntax.js';
import type { Design } from './design.js';
import { exactRows } from './exactRows.js';
import { gateDiagram } from './gateDiagrams.js';
import { PrimitiveTable } from './primitiveTable.js';
import type { Recording } from './recording.js';
import { lowerSequential } from './sequentialPrimitive.js';
import { buildTruthTable, truthTable } from './truthTable.js';

/** Tables are looked through for every combination of their inputs: 2^12 of them at most. */
const MAX_INPUTS = 12;

/** A message about a primitive as it is used. */
export interface PrimitiveRemark {
  readonly code: 'not-supported' | 'table-run';
  readonly message: string;
}

/**
 * Builds the logic of a primitive with an output and inputs; returns what there is to say about it.
 *
 * Where what is built does not say all that the table says of x, or is not even like it, the
 * recording gets the table too. A combination without a row gives x (IEEE 1364-2005, clause 8),
 * which two-valued runs read as 0.
 */
export function lowerPrimitive(
  design: Design,
  primitive: PrimitiveSyntax,
  recording: Recording,
  output: NetId,
  inputs: readonly NetId[],
): PrimitiveRemark | undefined {
  const { ports, rows, sequential, initial } = primitive;
  const name = design.text(primitive.name);
  if (inputs.length > MAX_INPUTS) {
    recording.drive(output, GateKind.Unknown, []);
    const reason = `it has ${inputs.length} inputs, more than ${MAX_INPUTS}; split it`;
    return { code: 'not-supported', message: `primitive ${name} is not supported: ${reason}` };
  }
  if (!sequential) {
    lowerCombinational(name, primitive, inputs, recording, output);
    return undefined;
  }
  const names = ports.slice(1).map((port) => design.text(port));
  const pins = { output, inputs, names, initial: initial ?? 2 };
  const source = eventsOfRows(exactRows(rows), inputs.length);
  const table = new PrimitiveTable(rows, inputs.length);
  const reason = lowerSequential({ name, table, source, isExact: true }, pins, recording);
  return reason === undefined
    ? undefined
    : { code: 'table-run', message: `primitive ${name} ${reason}` };
}

function lowerCombinational(
  name: string,
  { rows }: PrimitiveSyntax,
  inputs: readonly NetId[],
  recording: Recording,
  output: NetId,
): void {
  const count = inputs.length;
  const table = new PrimitiveTable(rows, count);
  const column = truthTable(count, (levels) => table.level(levels, 0) === '1');
  const exact = combinationalDiagram(exactRows(rows), count);
  if (exact.settled === gateDiagram(exact.diagram, column, count)) {
    recording.drive(output, GateKind.Buf, [buildTruthTable(column, inputs, recording)]);
    return;
  }
  if (column.includes('0') && column.includes('1')) {
    recording.drive(output, GateKind.Buf, [buildTruthTable(column, inputs, recording)]);
  } else {
    // A gate all the same: what depends on x is no constant.
    const [kind, constant] = column.includes('1')
      ? ([GateKind.Or, GateKind.One] as const)
      : ([GateKind.And, GateKind.Zero] as const);
    recording.drive(output, kind, [inputs[0]!, recording.constant(constant)]);
  }
  const made = combinationalTable(name, count, exact);
  const reads = made.three.settlers.map((place) => inputs[place]!);
  recording.tables.push({ output, inputs, reads, table: made });
}
