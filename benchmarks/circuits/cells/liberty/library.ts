import { areaOf, type Cell, libraryName } from '../cell.js';
import { cells } from '../library.js';
import { type Dialect, dialects, libertyFunction } from './functions.js';
import { busType, functionTiming, pinGroup } from './pins.js';
import { clockGateItems, flopItems, latchItems } from './stateCells.js';
import { delayTiming, supply, templates } from './tables.js';
import { group, type LibertyGroup, type LibertyItem, libertyLines, plain, quoted } from './text.js';

/** The file of the cells in Liberty form. */
export const libertyFile = `${libraryName}.lib`;

/** The cells as a Liberty library, in chunks of whole lines. */
export function* libertyLibrary(): Generator<string> {
  yield `/* ${libraryName}: ${cells.length} cells. Delays and powers are invented. */\n`;
  yield `library (${libraryName}) {\n`;
  for (const item of header()) yield `${[...libertyLines(item, 1)].join('\n')}\n`;
  for (const [i, cell] of cells.entries()) {
    const item = cellGroup(cell, dialects[i % dialects.length]!);
    yield `${[...libertyLines(item, 1)].join('\n')}\n`;
  }
  yield '}\n';
}

function header(): LibertyItem[] {
  const widths = new Set(cells.flatMap((cell) => cell.pins.map(({ width }) => width)));
  return [
    'delay_model : table_lookup;',
    'technology (cmos);',
    quoted('time_unit', '1ns'),
    quoted('voltage_unit', '1V'),
    quoted('leakage_power_unit', '1nW'),
    'capacitive_load_unit (1, pf);',
    'voltage_map (vdd, 0.9);',
    'voltage_map (vss, 0.0);',
    quoted('bus_naming_style', '%s[%d]'),
    group('operating_conditions', 'usual', 'process : 1;', 'temperature : 25;', 'voltage : 0.9;'),
    plain('default_operating_conditions', 'usual'),
    ...templates,
    ...[...widths].filter((width) => width > 1).map(busTypeGroup),
  ];
}

function busTypeGroup(width: number): LibertyGroup {
  return group(
    'type',
    busType(width),
    'base_type : array;',
    'data_type : bit;',
    plain('bit_width', width),
    plain('bit_from', width - 1),
    'bit_to : 0;',
    'downto : true;',
  );
}

function cellGroup(cell: Cell, dialect: Dialect): LibertyGroup {
  return group(
    'cell',
    cell.name,
    plain('area', areaOf(cell)),
    quoted('cell_footprint', cell.family),
    ...supply(cell),
    ...itemsOf(cell, dialect),
  );
}

function itemsOf(cell: Cell, dialect: Dialect): LibertyItem[] {
  switch (cell.kind) {
    case 'logic':
      return cell.pins.map((pin) => {
        const is = cell.functions.find((each) => each.pin === pin.name)?.is;
        if (is === undefined) return pinGroup(pin);
        const text = libertyFunction(is, dialect);
        return pinGroup(pin, quoted('function', text), ...functionTiming(cell, is));
      });
    case 'triState':
      return cell.pins.map((pin) => {
        if (pin.direction === 'input') return pinGroup(pin);
        const { enable, is } = cell;
        return pinGroup(
          pin,
          quoted('function', libertyFunction(is, dialect)),
          quoted(
            'three_state',
            libertyFunction(enable === 'en' ? ['not', enable] : enable, dialect),
          ),
          ...functionTiming(cell, is),
          delayTiming(cell, enable, 'three_state_enable', 'positive_unate'),
        );
      });
    case 'flop':
      return flopItems(cell, dialect);
    case 'latch':
      return latchItems(cell, dialect);
    case 'clockGate':
      return clockGateItems(cell);
    case 'physical':
      return cell.pins.map((pin) => pinGroup(pin));
  }
}
