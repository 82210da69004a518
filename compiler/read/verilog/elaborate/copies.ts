import { PartKind, unpackTraits } from '../../../circuit/busParts.js';
import { NO_NET } from '../../../circuit/ids.js';
import type { ModuleBody } from './body.js';
import { BUS_PART, BusPin } from './recording.js';
import type { Usage } from './usage.js';

/**
 * Lets assignments of a bus to another net hand on its z: they become copies, and their targets
 * buses in turn. Returns whether there was any.
 */
export function handOnFloating({ builder, copies }: ModuleBody, usage: Usage): boolean {
  if (copies.length === 0) return false;
  const byData = new Map<number, number[]>();
  const pending: number[] = [];
  for (let i = 0; i < copies.length; i++) {
    const driver = copies.get(i);
    const data = builder.find(builder.faninAt(builder.faninStart(driver)));
    if (usage.mayFloat(data)) pending.push(driver);
    else if (!byData.has(data)) byData.set(data, [driver]);
    else byData.get(data)!.push(driver);
  }
  const isAny = pending.length > 0;
  for (let driver = pending.pop(); driver !== undefined; driver = pending.pop()) {
    const output = builder.find(builder.driverOutput(driver));
    const isOnlyGate = builder.driverKind(driver) !== BUS_PART && usage.drivers(output) === 1;
    makeCopy(builder, driver);
    if (!isOnlyGate && usage.drivers(output) !== 0) continue;
    pending.push(...(byData.get(output) ?? []));
    byData.delete(output);
  }
  return isAny;
}

function makeCopy(builder: ModuleBody['builder'], driver: number): void {
  const { source, offset } = builder.driverOrigin(driver);
  builder.at(source, offset);
  const start = builder.faninStart(driver);
  const isPart = builder.driverKind(driver) === BUS_PART;
  const control = isPart ? builder.faninAt(start + BusPin.Control) : NO_NET;
  const traits = isPart ? unpackTraits(builder.faninAt(start + BusPin.Traits)) : {};
  const kind = PartKind.Copy;
  builder.busPart(builder.driverOutput(driver), builder.faninAt(start), control, {
    ...traits,
    kind,
  });
  builder.drop(driver);
}
