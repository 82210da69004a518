import { timeUnits } from './vcdHeader.js';

/**
 * A period such as `10`, `10ns` or `2.5 us` in units of a file, of which one has `unit` femtoseconds
 * (undefined where the file does not say); a string if it is none, telling why.
 */
export function periodUnits(text: string, unit: bigint | undefined): number | string {
  const [, whole, fraction = '', name] = /^(\d+)(?:\.(\d+))?\s*([munpf]?s)?$/.exec(text) ?? [];
  if (whole === undefined) return `${text} is no period; give such as 10ns, or a number of units`;
  if (name === undefined) {
    const units = Number(whole);
    return fraction === '' && units > 0 && Number.isSafeInteger(units)
      ? units
      : `a period of ${text} units of time is no whole number of them from 1 on`;
  }
  if (unit === undefined) return `the file has no timescale; give the period as a number of units`;
  const scale = 10n ** BigInt(fraction.length);
  const scaled = BigInt(whole + fraction) * timeUnits[name]!;
  const units = scaled / (scale * unit);
  const isWhole = units > 0n && units * scale * unit === scaled;
  return isWhole
    ? Number(units)
    : `a period of ${text} is no whole number of the file's time units`;
}
