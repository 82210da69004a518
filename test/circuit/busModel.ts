import { NetType, Strength } from '../../compiler/circuit/busParts.js';

/** A driver of a net, with the values of its data and its enable: 0, 1 or 2 for x. */
export interface ModelDriver {
  readonly data: number;
  readonly enable: number;
  readonly zero: Strength;
  readonly one: Strength;
}

/** A value and its strength; `HighZ` with any value is z. */
interface Signal {
  readonly value: number;
  readonly strength: Strength;
}

const choices = (value: number): readonly number[] => (value === 2 ? [0, 1] : [value]);

/**
 * The value that loads read from a net: 0, 1 or 2 for x.
 *
 * IEEE 1364-2005, clause 7.10: signals of known value and strength are combined (7.10.1, 7.10.4);
 * an unknown value or strength stands for each of the signals in its range (7.10.2), and the net
 * has a known value where all combinations agree on it.
 */
export function modelValue(type: NetType, drivers: readonly ModelDriver[]): number {
  let combinations: readonly (readonly Signal[])[] = [[]];
  for (const { data, enable, zero, one } of drivers) {
    const signals = choices(enable).flatMap((isOn) =>
      choices(data).map((value): Signal => {
        const strength = value === 1 ? one : zero;
        return { value, strength: isOn === 1 ? strength : Strength.HighZ };
      }),
    );
    combinations = combinations.flatMap((before) => signals.map((signal) => [...before, signal]));
  }
  const values = new Set(combinations.map((signals) => combined(type, signals)));
  return values.size === 1 ? [...values][0]! : 2;
}

/** Whether two drivers of the greatest strength give the net 0 and 1, all values being known. */
export function modelConflict(drivers: readonly ModelDriver[]): boolean {
  const strongest = strongestOf(drivers.map(signalOf));
  return new Set(strongest.map(({ value }) => value)).size === 2;
}

/** Whether no driver drives, all values being known. */
export const modelFloats = (drivers: readonly ModelDriver[]): boolean =>
  strongestOf(drivers.map(signalOf)).length === 0;

const signalOf = ({ data, enable, zero, one }: ModelDriver): Signal => ({
  value: data,
  strength: enable === 0 ? Strength.HighZ : data === 1 ? one : zero,
});

function strongestOf(signals: readonly Signal[]): readonly Signal[] {
  const greatest = Math.max(Strength.HighZ, ...signals.map(({ strength }) => strength));
  if (greatest === Strength.HighZ) return [];
  return signals.filter(({ strength }) => strength === greatest);
}

function combined(type: NetType, signals: readonly Signal[]): number {
  const values = strongestOf(signals).map(({ value }) => value);
  if (values.length === 0) return 2;
  if (values.every((value) => value === values[0])) return values[0]!;
  if (type === NetType.And) return 0;
  return type === NetType.Or ? 1 : 2;
}
