import type { PortLayout, RowLayout } from '../layout.js';
import type { BitRange } from '../valueText.js';

/** A column of a table: a port, or a part of one. */
export interface PortColumn extends BitRange {
  /** As the header has it. */
  readonly name: string;
  /** Index of the field in a record. */
  readonly field: number;
}

/**
 * What a header name means: a port, `port[3]` or `port[7:4]`; else a string that tells what is
 * wrong with it, to be printed after the name's place.
 */
export function columnOf(name: string, field: number, row: RowLayout): PortColumn | string {
  // Escaped identifiers may contain brackets, so the whole name is tried first.
  const whole = row.ports.find((port) => port.name === name);
  if (whole) return { name, field, offset: whole.offset, width: whole.width };
  const [, base, left, right = left] =
    /^(.*)\[\s*(-?\d+)\s*(?::\s*(-?\d+)\s*)?\]$/.exec(name) ?? [];
  const port = row.ports.find((candidate) => candidate.name === base);
  if (port === undefined) return `no such port: ${name || '(no name)'}${listOf(row)}`;
  if (!port.isVector) return `${port.name} has one bit and takes no index`;
  const high = placeInPort(port, Number(left));
  const low = placeInPort(port, Number(right));
  if (high < 0 || low < 0) return `${name} is outside ${declared(port)}`;
  if (high < low) return `${name} runs against ${declared(port)}; swap the two indices`;
  return { name, field, offset: port.offset + low, width: high - low + 1 };
}

/** A port with its declared range: `a[7:0]`, or `a` for a scalar. */
export const declared = ({ name, isVector, msb, lsb }: PortLayout): string =>
  isVector ? `${name}[${msb}:${lsb}]` : name;

/** Two columns that share a bit, the one further left first; undefined if none do. */
export function overlap(columns: readonly PortColumn[]): [PortColumn, PortColumn] | undefined {
  const sorted = [...columns].sort((a, b) => a.offset - b.offset || a.field - b.field);
  for (let i = 1; i < sorted.length; i++) {
    const before = sorted[i - 1]!;
    const after = sorted[i]!;
    if (after.offset < before.offset + before.width) {
      return before.field < after.field ? [before, after] : [after, before];
    }
  }
  return undefined;
}

// Counted from the right; -1 outside the declaration.
function placeInPort({ msb, lsb, width }: PortLayout, index: number): number {
  const place = lsb <= msb ? index - lsb : lsb - index;
  return place >= 0 && place < width ? place : -1;
}

const MOST_NAMES = 20;

function listOf({ ports }: RowLayout): string {
  if (ports.length === 0) return '; there are none';
  const names = ports.slice(0, MOST_NAMES).map(declared).join(', ');
  const rest = ports.length - MOST_NAMES;
  return `; there ${ports.length === 1 ? 'is' : 'are'} ${names}${rest > 0 ? ` and ${rest} more` : ''}`;
}
