/** What is kept of a kind of group; whatever a rule does not name is passed over. */
export interface GroupRule {
  readonly attributes: ReadonlySet<string>;
  readonly groups: ReadonlyMap<string, GroupRule>;
  /** Whether only the existence of the group matters. */
  readonly isEmpty: boolean;
}

function rule(
  attributes: readonly string[],
  groups: Readonly<Record<string, GroupRule>> = {},
): GroupRule {
  return {
    attributes: new Set(attributes),
    groups: new Map(Object.entries(groups)),
    isEmpty: attributes.length === 0 && Object.keys(groups).length === 0,
  };
}

const pinAttributes = [
  'direction',
  'driver_type',
  'function',
  'input_map',
  'internal_node',
  'state_function',
  'three_state',
];
const gateMarks = ['clock', 'enable', 'out', 'test'].map((part) => `clock_gate_${part}_pin`);
const pin = rule([...pinAttributes, ...gateMarks]);
const setAndReset = ['clear', 'clear_preset_var1', 'clear_preset_var2', 'preset'];
const flipFlop = rule(['clocked_on', 'clocked_on_also', 'next_state', ...setAndReset]);
const latch = rule(['data_in', 'enable', 'enable_also', ...setAndReset]);
const type = rule(['bit_from', 'bit_to', 'bit_width', 'downto']);

/** The rule of a cell group. */
export const cellRule: GroupRule = rule(['clock_gating_integrated_cell'], {
  bundle: rule([...pinAttributes, 'members'], { pin }),
  bus: rule([...pinAttributes, 'bus_type'], { pin }),
  ff: flipFlop,
  ff_bank: flipFlop,
  latch,
  latch_bank: latch,
  pg_pin: rule([]),
  pin,
  statetable: rule(['table']),
  test_cell: rule([]),
  type,
});

/** The rule of a library group. */
export const libraryRule: GroupRule = rule(['bus_naming_style'], { cell: cellRule, type });

/** The rule of a file: what may stand outside all groups. */
export const fileRule: GroupRule = rule([], { library: libraryRule });
