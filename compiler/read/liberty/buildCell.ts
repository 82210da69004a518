import type { NetId } from '../../circuit/ids.js';
import { Children } from '../verilog/elaborate/children.js';
import type { Recording } from '../verilog/elaborate/recording.js';
import { usageOf } from '../verilog/elaborate/usage.js';
import { buildState, declareState, MODEL_CURE, type StateNets } from './buildState.js';
import { StateTableBuild } from './buildStateTable.js';
import type { LibertyCell, LibertyPin } from './cell.js';
import { CellBuild, type CellReport } from './cellBuild.js';
import { contextOf } from './cellNets.js';
import { drivePin, driveUnknown, holdPin } from './drivePin.js';

/** The nets of a cell whose logic has been built. */
export interface BuiltCell {
  /** The net of each pin, those of the ports first. */
  readonly pins: readonly NetId[];
  /** The nets of all ports, each least significant bit first. */
  readonly boundary: readonly NetId[];
  readonly states: readonly StateNets[];
}

/** Builds the logic of a cell: registers and latches of its states, gates of its functions. */
export function buildCell(cell: LibertyCell, recording: Recording, report: CellReport): BuiltCell {
  for (const problem of cell.problems) report(problem.code, problem.message, problem);
  const build = new CellBuild(cell, recording, report);
  const states = cell.states.map((state) => declareState(build, state));
  const table = cell.stateTable && new StateTableBuild(build, cell.stateTable);
  for (const [index, state] of cell.states.entries()) buildState(build, state, states[index]!);
  const silent: LibertyPin[] = [];
  for (const [index, pin] of cell.pins.entries()) {
    if (pin.direction === 'input' || pin.direction === 'supply') continue;
    const net = build.nets.pins[index]!;
    const value = shownBy(build, table, pin);
    if (value === SILENT) {
      if (!holdPin(build, pin, net)) silent.push(pin);
    } else if (value === undefined) driveUnknown(build, pin, net);
    else drivePin(build, pin, net, value);
  }
  const usage = usageOf(recording, new Children(), []);
  reportSilent(
    build,
    // Nobody misses an internal pin that no function names.
    silent.filter((pin) => pin.direction !== 'internal' || usage.isRead(netOf(build, pin))),
  );
  return { pins: build.nets.pins, boundary: build.nets.boundary, states };
}

/** Value of a pin of which the library says nothing. */
const SILENT = 'silent';

/** The net whose value a pin shows; undefined after a report. */
function shownBy(
  build: CellBuild,
  table: StateTableBuild | undefined,
  pin: LibertyPin,
): NetId | typeof SILENT | undefined {
  const text = pin.function ?? pin.stateFunction;
  if (text !== undefined) return build.function(text, contextOf(pin));
  if (pin.internalNode === undefined || table === undefined) return SILENT;
  return table.node(pin.internalNode, pin.inputMap);
}

const netOf = ({ cell, nets }: CellBuild, pin: LibertyPin): NetId =>
  nets.pins[cell.pins.indexOf(pin)]!;

/** Refuses a cell of which some pins have no logic. */
function reportSilent(build: CellBuild, pins: readonly LibertyPin[]): void {
  const { report, cell } = build;
  const [first] = pins;
  if (first === undefined) return;
  for (const pin of pins) driveUnknown(build, pin, netOf(build, pin));
  const { clockGate } = cell;
  const names = pins.map(({ name }) => name);
  const shown = names.slice(0, 4).join(', ') + (names.length > 4 ? ', …' : '');
  if (clockGate !== undefined) {
    const message =
      `cell ${cell.name} is a clock gate of the kind ${clockGate.text}, ` +
      `but the library gives no logic for ${shown}; ${MODEL_CURE}`;
    report('not-supported', message, clockGate);
    return;
  }
  const which = names.length === 1 ? `pin ${shown}` : `the pins ${shown}`;
  const message = `the library gives no logic for ${which} of cell ${cell.name}; ${MODEL_CURE}`;
  report('not-supported', message, first);
}
