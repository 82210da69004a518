import type { Cell } from '../cell.js';
import { group, type LibertyGroup, type LibertyItem, plain, quoted } from './text.js';

// Axes of all tables, in ns and pF.
const slews = [0.01, 0.08, 0.4];
const loads = [0.001, 0.01, 0.08];

/** The templates that the tables below follow. */
export const templates: readonly LibertyGroup[] = [
  template('lu_table_template', 'delay_3x3', [
    'input_net_transition',
    'total_output_net_capacitance',
  ]),
  template('lu_table_template', 'check_3x3', [
    'related_pin_transition',
    'constrained_pin_transition',
  ]),
  template('power_lut_template', 'energy_3x3', [
    'input_transition_time',
    'total_output_net_capacitance',
  ]),
];

function template(kind: string, name: string, variables: readonly string[]): LibertyGroup {
  return group(
    kind,
    name,
    ...variables.map((variable, i) => plain(`variable_${i + 1}`, variable)),
    `index_1 ("${slews.join(', ')}");`,
    `index_2 ("${loads.join(', ')}");`,
  );
}

function table(kind: string, name: string, at: (slew: number, load: number) => number) {
  const rows = slews.map(
    (slew) => `"${loads.map((load) => at(slew, load).toFixed(4)).join(', ')}"`,
  );
  return group(kind, name, `values (${rows.join(', \\\n')});`);
}

/** A delay from one pin to the pin that holds the group. */
export function delayTiming(
  cell: Cell,
  related: string,
  type: string,
  sense: string,
): LibertyGroup {
  const at = (slope: number) => (slew: number, load: number) =>
    slope * (0.02 + 0.2 * slew + load / cell.drive);
  return group(
    'timing',
    '',
    quoted('related_pin', related),
    plain('timing_sense', sense),
    plain('timing_type', type),
    table('cell_rise', 'delay_3x3', at(1.2)),
    table('cell_fall', 'delay_3x3', at(1)),
    table('rise_transition', 'delay_3x3', at(0.8)),
    table('fall_transition', 'delay_3x3', at(0.7)),
  );
}

/** A check of a pin against an edge of another one, such as `setup_rising`. */
export function checkTiming(related: string, type: string): LibertyGroup {
  const at = (slew: number, other: number) => 0.04 + 0.1 * slew - other;
  return group(
    'timing',
    '',
    quoted('related_pin', related),
    plain('timing_type', type),
    table('rise_constraint', 'check_3x3', at),
    table('fall_constraint', 'check_3x3', at),
  );
}

/** The energy of a change of the pin. */
export function internalPower(cell: Cell, related: string): LibertyGroup {
  const at = (slew: number, load: number) => 0.001 * cell.drive * (1 + slew + load);
  return group(
    'internal_power',
    '',
    quoted('related_pin', related),
    quoted('related_pg_pin', 'vdd'),
    table('rise_power', 'energy_3x3', at),
    table('fall_power', 'energy_3x3', at),
  );
}

/** Supply pins and leakage, which every cell has. */
export function supply(cell: Cell): LibertyItem[] {
  const pin = (name: string, type: string) =>
    group('pg_pin', name, quoted('voltage_name', name), plain('pg_type', type));
  return [
    pin('vdd', 'primary_power'),
    pin('vss', 'primary_ground'),
    group('leakage_power', '', quoted('related_pg_pin', 'vdd'), plain('value', cell.drive * 0.3)),
  ];
}
