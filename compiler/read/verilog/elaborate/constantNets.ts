import type { CircuitBuilder } from '../../../circuit/builder.js';
import { PartKind, Strength, unpackTraits } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { type NetId, NO_NET, netId } from '../../../circuit/ids.js';
import type { Recording } from './recording.js';
import type { Usage } from './usage.js';

/**
 * The nets of a module that have nothing but a constant to drive them, and are no ports: literals
 * in connections above all. Values at power-up of variables, by `defaults`, may still change.
 */
export function constantNetsOf(
  recording: Recording,
  usage: Usage,
  boundary: Uint32Array,
  find: (net: number) => number,
  defaults: ReadonlySet<number>,
): Map<number, 0 | 1> {
  const constants = new Map<number, 0 | 1>();
  for (let driver = 0; driver < recording.driverCount; driver++) {
    const kind = recording.driverKind(driver);
    if ((kind !== GateKind.Zero && kind !== GateKind.One) || defaults.has(driver)) continue;
    const net = netId(find(recording.driverOutput(driver)));
    if (usage.drivers(net) !== 1 || usage.isBus(net)) continue;
    constants.set(net, kind === GateKind.One ? 1 : 0);
  }
  for (const net of boundary) constants.delete(net);
  return constants;
}

/** The nets of a circuit that are known to be constant as far as it is built. */
export class ConstantNets {
  readonly #builder: CircuitBuilder;
  /** -1 where two supplies disagree. */
  readonly #levels = new Map<number, number>();

  constructor(builder: CircuitBuilder) {
    this.#builder = builder;
  }

  add(net: number, level: 0 | 1): void {
    this.#levels.set(net, level);
  }

  /** Takes note of what drives a bus, see `CircuitBuilder.busPart`: a supply wins over all else. */
  addPart(net: NetId, data: NetId, control: NetId, traits: number): void {
    const kind = this.#builder.kindOf(data);
    if (control !== NO_NET || (kind !== GateKind.Zero && kind !== GateKind.One)) return;
    const level = kind === GateKind.One ? 1 : 0;
    const { kind: part, zero, one } = unpackTraits(traits);
    if (part !== PartKind.Driver || (level === 0 ? zero : one) !== Strength.Supply) return;
    const known = this.#levels.get(net) ?? level;
    this.#levels.set(net, known === level ? level : -1);
  }

  /** 0 or 1 where a net always has that level, else -1. */
  of(net: number): number {
    return this.#levels.get(net) ?? -1;
  }
}
