import type { Circuit } from '../../circuit/circuit.js';
import { GateKind, gateInfo } from '../../circuit/gates.js';
import { NO_NET } from '../../circuit/ids.js';
import type { ActiveTables } from '../../circuit/tables/activeTables.js';
import { stateOf } from '../../circuit/tables/tableRows.js';
import type { Algebra, NetValue } from './algebra.js';
import type { MemoryLogic, PendingWrite } from './memoryLogic.js';
import { withSetReset } from './setReset.js';
import { diagramValue } from './tableValue.js';

/** The parts of a moment by which a driver's value follows from other nets. */
export interface DriverContext {
  readonly circuit: Circuit;
  readonly algebra: Algebra;
  /** Per net driven by a register or latch: its index among these. */
  readonly elementOf: Int32Array;
  readonly tables: ActiveTables;
  /** What memory ports read, and what has been written in the cycle so far. */
  readonly memories: MemoryLogic;
  readonly writes: readonly PendingWrite[];
}

/**
 * What the driver of a net makes of the values of other nets, by `value`. `held` is what a
 * register or latch holds; gates do without.
 */
export function driverValue(
  context: DriverContext,
  net: number,
  value: (net: number) => NetValue,
  held: NetValue,
): NetValue {
  const entry = context.tables.of(net);
  if (entry >= 0) return tableValue(context, entry, value, held);
  switch (context.circuit.kind[net]) {
    case GateKind.Register:
      return registerValue(context, net, value, held);
    case GateKind.Latch:
      return latchValue(context, net, value, held);
    case GateKind.Mux:
      return muxValue(context, net, value);
    case GateKind.CaseEqual:
      return caseEqualValue(context, net, value);
    case GateKind.MemoryRead:
      return context.memories.read(net, value, context.writes);
    default:
      return foldValue(context, net, value);
  }
}

function tableValue(
  { tables, algebra }: DriverContext,
  entry: number,
  value: (net: number) => NetValue,
  held: NetValue,
): NetValue {
  const { diagram } = tables.form(entry);
  const state = stateOf(tables.table(entry).inputs);
  return diagramValue(algebra, diagram, tables.settled(entry), (variable) =>
    variable === state ? held : value(tables.input(entry, variable)),
  );
}

function registerValue(
  { circuit: { registers }, algebra, elementOf }: DriverContext,
  net: number,
  value: (net: number) => NetValue,
  held: NetValue,
): NetValue {
  const r = elementOf[net]!;
  const pin = (of: number): NetValue => (of === NO_NET ? algebra.zero : value(of));
  const { set, reset, priority } = registers;
  return withSetReset(algebra, held, pin(set[r]!), pin(reset[r]!), priority[r]!);
}

function latchValue(
  { circuit: { latches }, algebra, elementOf }: DriverContext,
  net: number,
  value: (net: number) => NetValue,
  held: NetValue,
): NetValue {
  const l = elementOf[net]!;
  const pin = (of: number): NetValue => (of === NO_NET ? algebra.zero : value(of));
  const { enable, data, set, reset, priority } = latches;
  const opened = pin(enable[l]!);
  const passed = opened === algebra.zero ? held : algebra.mux(opened, held, pin(data[l]!));
  return withSetReset(algebra, passed, pin(set[l]!), pin(reset[l]!), priority[l]!);
}

function muxValue(
  { circuit: { faninStart, fanin }, algebra }: DriverContext,
  net: number,
  value: (net: number) => NetValue,
): NetValue {
  const at = faninStart[net]!;
  const select = value(fanin[at]!);
  if (select === algebra.zero) return value(fanin[at + 1]!);
  if (select === algebra.one) return value(fanin[at + 2]!);
  return algebra.mux(select, value(fanin[at + 1]!), value(fanin[at + 2]!));
}

function caseEqualValue(
  { circuit: { faninStart, fanin }, algebra }: DriverContext,
  net: number,
  value: (net: number) => NetValue,
): NetValue {
  const at = faninStart[net]!;
  return algebra.not(algebra.differs(value(fanin[at]!), value(fanin[at + 1]!)));
}

// Wide gates become balanced trees: short paths for the processor to overlap.
function foldValue(
  { circuit, algebra }: DriverContext,
  net: number,
  value: (net: number) => NetValue,
): NetValue {
  const { operation, inverted } = gateInfo(circuit.kind[net]!).fold!;
  const start = circuit.faninStart[net]!;
  const end = circuit.faninStart[net + 1]!;
  let row: NetValue[] = [];
  for (let i = start; i < end; i++) row.push(value(circuit.fanin[i]!));
  while (row.length > 1) {
    const shorter: NetValue[] = [];
    for (let i = 0; i + 1 < row.length; i += 2) {
      shorter.push(algebra[operation](row[i]!, row[i + 1]!));
    }
    if (row.length % 2 === 1) shorter.push(row[row.length - 1]!);
    row = shorter;
  }
  return inverted ? algebra.not(row[0]!) : row[0]!;
}
