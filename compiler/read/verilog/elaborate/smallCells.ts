import { GateKind } from '../../../circuit/gates.js';
import type { ModuleBody } from './body.js';
import type { Boundary } from './ports.js';

/** So many gates and constants make up a cell at most. */
const MAX_DRIVERS = 32;

/**
 * Whether a module looks like the model of a library cell though no `celldefine` says so: a few
 * gates and primitives between ports of one bit, with one register or latch at most and no modules
 * inside. What is built of it is then said to come from the instance in the netlist, which says
 * more than the text of the model.
 */
export function isSmallCell(
  { builder, children, design }: ModuleBody,
  boundary: Boundary,
): boolean {
  if (builder.driverCount > MAX_DRIVERS || builder.memories.length > 0) return false;
  if (boundary.ports.some(({ width }) => width !== 1)) return false;
  let states = 0;
  for (let driver = 0; driver < builder.driverCount; driver++) {
    const kind = builder.driverKind(driver);
    if (kind === GateKind.Register || kind === GateKind.Latch) states++;
  }
  for (let child = 0; child < children.count; child++) {
    const { blocks } = design.templates[children.template(child)]!;
    if (blocks.length > 0) return false;
  }
  return states <= 1 && children.count <= MAX_DRIVERS;
}
