import type { PortLayout } from '../layout.js';
import { anyBit, readBits, writeBits } from '../rowBits.js';
import { formatValue } from '../valueText.js';

/**
 * The value of a port or net: a number up to 32 bits, a bigint above; where a bit is x the text
 * `x` (one bit) or `0b` and all bits, most significant first (`0b10x1`).
 */
export type Value = number | bigint | string;

/** Where the bits of a port stand, and what it is called. */
export type Place = Pick<PortLayout, 'name' | 'width' | 'offset'>;

/** A packed row: its words, and where those start that tell which bits are x, if any can be. */
export interface Row {
  readonly words: Uint32Array;
  readonly at: number;
  readonly unknownAt: number | undefined;
}

/** Reads the value at a place of a row. */
export function readValue({ words, at, unknownAt }: Row, place: Place): Value {
  const { offset, width } = place;
  if (unknownAt !== undefined && anyBit(words, unknownAt, offset, width)) {
    return formatValue(place, words, at, unknownAt);
  }
  if (width <= 32) return readBits(words, at, offset, width);
  let value = 0n;
  for (let low = (width - 1) & ~31; low >= 0; low -= 32) {
    const part = readBits(words, at, offset + low, Math.min(32, width - low));
    value = (value << 32n) | BigInt(part);
  }
  return value;
}

/** Writes a value at a place of a row. Throws TypeError for its kind, RangeError for its size. */
export function writeValue({ words, at, unknownAt }: Row, place: Place, value: unknown): void {
  const { offset, width } = place;
  if (
    width <= 32 &&
    Number.isInteger(value) &&
    (value as number) >= 0 &&
    (value as number) < 2 ** width
  ) {
    writeBits(words, at, offset, width, value as number);
    if (unknownAt !== undefined) writeBits(words, unknownAt, offset, width, 0);
    return;
  }
  const isText = typeof value === 'string' && unknownAt !== undefined;
  const bits = isText ? textBits(place, value) : numberBits(place, value, unknownAt !== undefined);
  for (let low = 0; low < width; low += 32) {
    const count = Math.min(32, width - low);
    writeBits(words, at, offset + low, count, Number((bits.ones >> BigInt(low)) & 0xffffffffn));
    if (unknownAt === undefined) continue;
    const unknown = Number((bits.unknown >> BigInt(low)) & 0xffffffffn);
    writeBits(words, unknownAt, offset + low, count, unknown);
  }
}

interface Bits {
  readonly ones: bigint;
  readonly unknown: bigint;
}

function numberBits({ name, width }: Place, value: unknown, hasX: boolean): Bits {
  const kind = width <= 32 ? 'number' : 'bigint';
  const orText = hasX ? `, or ${width === 1 ? "'x'" : "'0b…'"}` : '';
  const given: string = typeof value;
  if (given !== kind) {
    throw new TypeError(
      `${name} takes a ${kind} (${bitCount(width)})${orText}, got ${shown(value)}`,
    );
  }
  const isWhole = typeof value === 'bigint' || Number.isInteger(value);
  const ones = isWhole ? BigInt(value as number | bigint) : -1n;
  if (ones < 0n || ones >> BigInt(width) !== 0n) {
    throw new RangeError(`${name} takes 0 to ${highest(width)}${orText}, got ${shown(value)}`);
  }
  return { ones, unknown: 0n };
}

function textBits({ name, width }: Place, text: string): Bits {
  const digits = text.startsWith('0b') ? text.slice(2) : text;
  if (digits.length !== width || !/^[01x]*$/.test(digits) || (width > 1 && digits === text)) {
    const form = width === 1 ? "0, 1 or 'x'" : `'0b' and ${width} digits 0, 1 or x`;
    throw new RangeError(`${name} takes ${form}, got ${shown(text)}`);
  }
  const bit = (one: string) => BigInt(`0b${digits.replace(/./g, (d) => (d === one ? '1' : '0'))}`);
  return { ones: bit('1'), unknown: bit('x') };
}

const highest = (width: number): string =>
  width <= 32 ? `${2 ** width - 1}` : `2n ** ${width}n - 1n`;

const bitCount = (width: number): string => (width === 1 ? '1 bit' : `${width} bits`);

/** A value as a message shows it. */
export function shown(value: unknown): string {
  if (typeof value === 'bigint') return `bigint ${value}n`;
  if (typeof value === 'string') return `'${value.length > 80 ? `${value.slice(0, 80)}…` : value}'`;
  if (typeof value === 'number' || typeof value === 'boolean') return `${typeof value} ${value}`;
  return value == null ? `${value}` : Object.prototype.toString.call(value).slice(8, -1);
}

/** Checks what should be an object with named fields. Throws TypeError for anything else. */
export function checkFields<T>(given: T, expected: string): T & object {
  if (typeof given === 'object' && given !== null && !Array.isArray(given)) return given;
  throw new TypeError(`expected ${expected}, got ${shown(given)}`);
}
