import type { BitRange } from './cell.js';
import type { LibertyGroup } from './syntax.js';

/** The most bits that a bus or bank may have; more are a fault of the text. */
export const MAX_BITS = 1 << 16;

/** A whole number that is no less than `least`; undefined for any other text. */
export function wholeNumber(text: string | undefined, least = 0): number | undefined {
  if (text === undefined || !/^\s*\d{1,9}\s*$/.test(text)) return undefined;
  const value = Number(text);
  return value < least ? undefined : value;
}

/** The indices that a `type` group gives to a bus; undefined where its numbers make no range. */
export function rangeOfType(type: LibertyGroup): BitRange | undefined {
  const number = (name: string): number | undefined =>
    wholeNumber(type.attributes.get(name)?.[0]?.text);
  const width = number('bit_width');
  const isDown = type.attributes.get('downto')?.[0]?.text === 'true';
  const last = width === undefined ? undefined : width - 1;
  const from = number('bit_from') ?? (isDown ? last : 0);
  const to = number('bit_to') ?? (isDown ? 0 : last);
  if (from === undefined || to === undefined || from < 0 || to < 0) return undefined;
  const count = Math.abs(from - to) + 1;
  if (count > MAX_BITS || (width !== undefined && width !== count)) return undefined;
  return { from, to };
}

/** Number of bits of a range. */
export const widthOf = ({ from, to }: BitRange): number => Math.abs(from - to) + 1;

/** The index at a place from the left. */
export const indexAt = ({ from, to }: BitRange, place: number): number =>
  to < from ? from - place : from + place;

/** The place from the left of an index, or -1 where the range does not have it. */
export function placeOf(range: BitRange, index: number): number {
  const place = range.to < range.from ? range.from - index : index - range.from;
  return place < widthOf(range) && place >= 0 ? place : -1;
}

/**
 * The places, in a bus, of the bits that a text such as `A[3]`, `A[7:4]` or, with another naming
 * style, `A<3>` stands for; undefined where it names no bits of the bus.
 */
export function placesOf(
  text: string,
  bus: string,
  range: BitRange,
  style: BusStyle,
): number[] | undefined {
  const rest = text.startsWith(bus) ? text.slice(bus.length) : '';
  const match = /^\s*\[\s*(\d{1,9})\s*(?::\s*(\d{1,9})\s*)?\]$/.exec(rest);
  const numbers = match === null ? styledNumbers(text, bus, style) : [match[1], match[2]];
  const first = wholeNumber(numbers?.[0]);
  const last = wholeNumber(numbers?.[1]) ?? first;
  if (first === undefined || last === undefined) return undefined;
  const [a, b] = [placeOf(range, first), placeOf(range, last)];
  if (a < 0 || b < 0) return undefined;
  const step = b < a ? -1 : 1;
  return Array.from({ length: Math.abs(b - a) + 1 }, (_, i) => a + i * step);
}

/** How `bus_naming_style` writes the name of a bit: `%s<%d>` has nothing before the name. */
export interface BusStyle {
  readonly before: string;
  readonly between: string;
  readonly after: string;
}

/** The style that is always understood. */
export const bracketStyle: BusStyle = { before: '', between: '[', after: ']' };

/** Reads a naming style; the usual one where it is no such text. */
export function busStyleOf(text: string | undefined): BusStyle {
  const match = /^(.*)%s(.*)%d(.*)$/s.exec(text ?? '');
  return match === null
    ? bracketStyle
    : { before: match[1]!, between: match[2]!, after: match[3]! };
}

/** The name of a bit in a style. */
export const styledName = ({ before, between, after }: BusStyle, bus: string, index: number) =>
  `${before}${bus}${between}${index}${after}`;

function styledNumbers(text: string, bus: string, style: BusStyle): string[] | undefined {
  const front = `${style.before}${bus}${style.between}`;
  if (!text.startsWith(front) || !text.endsWith(style.after)) return undefined;
  const inside = text.slice(front.length, text.length - style.after.length);
  return /^\d{1,9}(:\d{1,9})?$/.test(inside) ? inside.split(':') : undefined;
}
