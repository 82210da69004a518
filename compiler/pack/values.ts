import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import { formatValue } from '../../runtime/valueText.js';

/** The value of a port in a row, as a caller writes it. */
export function givenValue(
  { inputs, threeValued }: ModelLayout,
  port: PortLayout,
  row: Uint32Array,
): number | bigint | string {
  const text = formatValue(port, row, 0, threeValued ? inputs.words : undefined);
  if (text.startsWith('0b') || text === 'x') return text;
  return port.width <= 32 ? Number(text) : BigInt(text);
}

/** A value that was read, as a response table writes it. */
export function textOf(value: number | bigint | string, width: number): string {
  if (typeof value === 'string') return value;
  return width === 1 ? `${value}` : hex(BigInt(value), width);
}

const hex = (value: bigint, width: number): string =>
  `0x${value.toString(16).padStart(Math.ceil(width / 4), '0')}`;

/** A word of memory contents (`Engine.memoryState`) from a byte on, as a response table writes it. */
export function memoryWord(
  bytes: Uint8Array,
  at: number,
  width: number,
  threeValued: boolean,
): string {
  const group = Math.ceil(width / 8);
  const bit = (from: number, i: number): number => (bytes[from + (i >>> 3)]! >>> (i & 7)) & 1;
  const digits = Array.from({ length: width }, (_, place) => {
    const i = width - 1 - place;
    return threeValued && bit(at + group, i) === 1 ? 'x' : `${bit(at, i)}`;
  }).join('');
  if (width === 1) return digits;
  return digits.includes('x') ? `0b${digits}` : hex(BigInt(`0b${digits}`), width);
}
