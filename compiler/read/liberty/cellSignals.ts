import type { NetId } from '../../circuit/ids.js';
import type { BuiltCell } from './buildCell.js';
import type { BitRange, LibertyCell } from './cell.js';

/** A name inside a cell that the user may see: its nets follow one another, the rightmost first. */
export interface CellSignal {
  readonly name: string;
  readonly first: NetId;
  readonly width: number;
  /** Undefined for a scalar. */
  readonly range: BitRange | undefined;
}

/** The ports but supplies, the internal pins and the state variables of a cell, each name once. */
export function signalsOf(cell: LibertyCell, built: BuiltCell): readonly CellSignal[] {
  const signals = new Map<string, CellSignal>();
  const add = (signal: CellSignal): void => {
    if (signal.name !== '' && !signals.has(signal.name)) signals.set(signal.name, signal);
  };
  for (const { name, direction, pins, range } of cell.ports) {
    if (direction === 'supply') continue;
    add({ name, first: built.pins[pins[0]!]!, width: pins.length, range });
  }
  for (const { name, pins, range } of cell.vectors) {
    const rightmost = built.pins[pins.at(-1)!]!;
    if (range !== undefined) add({ name, first: rightmost, width: pins.length, range });
  }
  for (const [index, { name, direction, vector }] of cell.pins.entries()) {
    const isBit = vector?.range !== undefined;
    if (!isBit && direction !== 'supply')
      add({ name, first: built.pins[index]!, width: 1, range: undefined });
  }
  for (const { name, first, width } of built.states) {
    const range = width === undefined ? undefined : { from: width - 1, to: 0 };
    add({ name, first, width: width ?? 1, range });
  }
  return [...signals.values()];
}
