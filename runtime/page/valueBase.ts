import { valueText } from '../model/nets.js';
import type { Value } from '../model/values.js';

/** How numbers are written. */
export type Base = 'hex' | 'decimal' | 'binary';

/** A value as it is shown. Where a bit is x it is written in binary. */
export function shownValue(value: Value, width: number, base: Base): string {
  if (typeof value === 'string' || base === 'hex') return valueText(value, width);
  if (base === 'decimal' || width === 1) return value.toString();
  return `0b${value.toString(2).padStart(width, '0')}`;
}

/** Reads what a user wrote into a field. Undefined where it is no value of some bits. */
export function typedValue(text: string, width: number, hasX: boolean): Value | undefined {
  const word = text.trim().toLowerCase().replaceAll('_', '');
  if (hasX && width === 1 && word === 'x') return 'x';
  if (hasX && /^0b[01x]+$/.test(word) && word.includes('x')) {
    return word.length - 2 <= width ? `0b${word.slice(2).padStart(width, '0')}` : undefined;
  }
  if (!/^(\d+|0x[0-9a-f]+|0b[01]+)$/.test(word)) return undefined;
  const value = BigInt(word);
  if (value >> BigInt(width) !== 0n) return undefined;
  return width <= 32 ? Number(value) : value;
}
