import { PartKind, Strength } from '../../circuit/busParts.js';
import { GateKind } from '../../circuit/gates.js';
import { type NetId, NO_NET } from '../../circuit/ids.js';
import { MODEL_CURE } from './buildState.js';
import type { LibertyPin } from './cell.js';
import type { CellBuild } from './cellBuild.js';
import { contextOf } from './cellNets.js';
import { wordsOf } from './words.js';

/** How a pin drives its two values, to which it is pulled, and whether it keeps the last one. */
interface DriverType {
  readonly zero?: Strength;
  readonly one?: Strength;
  readonly pull?: GateKind;
  readonly keeps?: true;
}

/** The words of `driver_type` (what they mean is from memory). */
const driverTypes: Readonly<Record<string, DriverType>> = {
  bus_hold: { keeps: true },
  open_drain: { one: Strength.HighZ },
  open_source: { zero: Strength.HighZ },
  pull_down: { pull: GateKind.Zero },
  pull_up: { pull: GateKind.One },
  resistive: { zero: Strength.Pull, one: Strength.Pull },
  resistive_0: { zero: Strength.Pull },
  resistive_1: { one: Strength.Pull },
};

/**
 * Lets a pin drive a value: always, or as a part of a bus where it has `three_state`, at 1 of which
 * it does not drive, or a `driver_type`. Reports what it cannot do.
 */
export function drivePin(build: CellBuild, pin: LibertyPin, net: NetId, value: NetId): void {
  const type = driverTypeOf(build, pin);
  const { threeState } = pin;
  const disabled = threeState && build.function(threeState, contextOf(pin));
  if (type === undefined || (threeState !== undefined && disabled === undefined)) {
    driveUnknown(build, pin, net);
    return;
  }
  const { recording } = build;
  const { zero = Strength.Strong, one = Strength.Strong } = type;
  if (disabled === undefined && zero === Strength.Strong && one === Strength.Strong) {
    recording.drive(net, GateKind.Buf, [value]);
    return;
  }
  const control = disabled === undefined ? NO_NET : build.gate(GateKind.Not, disabled);
  recording.busPart(net, value, control, { kind: PartKind.Driver, zero, one });
  holdNet(build, net, type);
}

/** Lets a pin without function pull or keep its net, if its `driver_type` says so. */
export function holdPin(build: CellBuild, pin: LibertyPin, net: NetId): boolean {
  const type = pin.driverType && driverTypeOf(build, pin);
  return type !== undefined && holdNet(build, net, type);
}

function holdNet(build: CellBuild, net: NetId, { pull, keeps }: DriverType): boolean {
  const hold = (value: NetId, strength: Strength): void => {
    const traits = { kind: PartKind.Driver, zero: strength, one: strength };
    build.recording.busPart(net, value, NO_NET, traits);
  };
  if (pull !== undefined) hold(build.recording.constant(pull), Strength.Pull);
  if (keeps) hold(build.gate(GateKind.Buf, net), Strength.Weak);
  return pull !== undefined || keeps === true;
}

/** After a report: nothing more shall be said of nets without driver. */
export function driveUnknown({ recording }: CellBuild, pin: LibertyPin, net: NetId): void {
  if (pin.direction === 'output') recording.drive(net, GateKind.Unknown, []);
}

function driverTypeOf({ cell, report }: CellBuild, pin: LibertyPin): DriverType | undefined {
  const { driverType } = pin;
  if (driverType === undefined) return {};
  let type: DriverType = {};
  for (const word of wordsOf(driverType.text)) {
    const known = driverTypes[word];
    if (known === undefined) {
      const message = `pin ${pin.name} of cell ${cell.name} has the driver_type ${word}`;
      report('not-supported', `${message}, which is not supported; ${MODEL_CURE}`, driverType);
      return undefined;
    }
    type = { ...type, ...known };
  }
  return type;
}
