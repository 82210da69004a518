import { type Cell, type Pin, pinNames } from '../cell.js';
import { type Expression, pinsRead, truthTable } from '../expression.js';
import { unateness } from '../verilog/timing.js';
import { delayTiming, internalPower } from './tables.js';
import { group, type LibertyItem, plain } from './text.js';

/** The library's bus type of a width. */
export const busType = (width: number): string => `lanes${width}`;

/** A pin, or a bus where it has several bits. */
export function pinGroup({ name, direction, width }: Pin, ...items: LibertyItem[]): LibertyItem {
  const electrical =
    direction === 'input' ? plain('capacitance', '0.0012') : plain('max_capacitance', '0.08');
  if (width === 1) return group('pin', name, plain('direction', direction), electrical, ...items);
  return group(
    'bus',
    name,
    plain('bus_type', busType(width)),
    plain('direction', direction),
    electrical,
    ...items,
  );
}

/** Timing and power of an output that is a function of inputs. */
export function functionTiming(cell: Cell, is: Expression): LibertyItem[] {
  const read = pinsRead(is);
  const table = truthTable(is, read);
  return read.flatMap((input, i) => {
    const sign = unateness(table, i, read.length);
    const sense = sign === '' ? 'non_unate' : `${sign === '+' ? 'positive' : 'negative'}_unate`;
    return [delayTiming(cell, input, 'combinational', sense), internalPower(cell, input)];
  });
}

/** Timing and power of the output of a state. */
export function stateTiming(cell: Cell, clock: string, type: string): LibertyItem[] {
  const controls = pinNames(cell, 'input').filter((name) => name === 'clr_n' || name === 'set_n');
  return [
    delayTiming(cell, clock, type, 'non_unate'),
    ...controls.map((name) =>
      delayTiming(cell, name, name === 'set_n' ? 'preset' : 'clear', 'positive_unate'),
    ),
    internalPower(cell, clock),
  ];
}
