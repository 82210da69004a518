import { indexAt, MAX_BITS, placesOf, rangeOfType, styledName, widthOf } from './bitRange.js';
import type {
  BitRange,
  LibertyPin,
  LibertyPort,
  LibertyVector,
  PinDirection,
  PinLogic,
} from './cell.js';
import type { CellDraft } from './draft.js';
import type { LibertyGroup, LibertyText } from './syntax.js';
import { wordsOf } from './words.js';

/** Groups that tell of one pin, the most particular first. */
type PinGroups = readonly LibertyGroup[];

/** Reads a `pin` group of the cell itself; it may describe several pins. */
export function readPins(draft: CellDraft, group: LibertyGroup): void {
  for (const { text } of group.names) {
    for (const name of wordsOf(text)) addScalar(draft, name, [group], undefined);
  }
}

/** Reads a supply pin. */
export function readSupply(draft: CellDraft, group: LibertyGroup): void {
  const name = group.names[0]?.text ?? '';
  if (!draft.isFree(name, group)) return;
  const { start, end } = group;
  const pin = { name, direction: 'supply' as const, ...noLogic, vector: undefined, place: 0 };
  draft.pins.push({ ...pin, start, end });
  draft.ports.push({ ...scalarPort, name, direction: 'supply', pins: [draft.pins.length - 1] });
}

/** Reads a bus: its bits come from its type, and may have `pin` groups of their own. */
export function readBus(draft: CellDraft, group: LibertyGroup): void {
  const name = group.names[0]?.text ?? '';
  const range = busRange(draft, group);
  if (range === undefined || !draft.isFree(name, group)) return;
  const vector: LibertyVector = { name, pins: [], range };
  const { style } = draft;
  const ownGroups = new Map<number, LibertyGroup>();
  for (const inner of group.groups) {
    for (const text of inner.names) {
      const places = placesOf(text.text, name, range, style);
      if (places === undefined) reportNoBit(draft, text, name, range);
      for (const place of places ?? []) ownGroups.set(place, inner);
    }
  }
  for (let place = 0; place < widthOf(range); place++) {
    const own = ownGroups.get(place);
    const index = indexAt(range, place);
    const bit = `${name}[${index}]`;
    const styled = styledName(style, name, index);
    if (styled !== bit) draft.aliases.set(styled, bit);
    addPin(draft, bit, own === undefined ? [group] : [own, group], vector);
  }
  draft.vectors.push(vector);
  const { direction } = draft.pins[vector.pins[0]!]!;
  if (direction === 'internal') return;
  draft.ports.push({ name, direction, pins: vector.pins.toReversed(), range });
}

/** Reads a bundle: its members are terminals each. */
export function readBundle(draft: CellDraft, group: LibertyGroup): void {
  const name = group.names[0]?.text ?? '';
  if (!draft.isFree(name, group)) return;
  const vector: LibertyVector = { name, pins: [], range: undefined };
  const ownGroups = new Map<string, LibertyGroup>();
  for (const inner of group.groups) {
    for (const { text } of inner.names) {
      for (const member of wordsOf(text)) ownGroups.set(member, inner);
    }
  }
  const listed = group.attributes.get('members') ?? [];
  const members = new Set(listed.flatMap(({ text }) => wordsOf(text)));
  for (const member of ownGroups.keys()) members.add(member);
  for (const member of members) {
    const own = ownGroups.get(member);
    addScalar(draft, member, own === undefined ? [group] : [own, group], vector);
  }
  draft.vectors.push(vector);
}

function addScalar(
  draft: CellDraft,
  name: string,
  groups: PinGroups,
  vector: LibertyVector | undefined,
): void {
  if (!draft.isFree(name, groups[0]!)) return;
  const { direction } = addPin(draft, name, groups, vector);
  if (direction === 'internal') return;
  draft.ports.push({ ...scalarPort, name, direction, pins: [draft.pins.length - 1] });
}

function addPin(
  draft: CellDraft,
  name: string,
  groups: PinGroups,
  vector: LibertyVector | undefined,
): LibertyPin {
  const logic = logicOf(groups);
  const { start, end } = groups[0]!;
  const direction = directionOf(draft, groups, logic);
  const place = vector?.pins.length ?? 0;
  const pin: LibertyPin = { name, direction, ...logic, vector, place, start, end };
  vector?.pins.push(draft.pins.length);
  draft.pins.push(pin);
  return pin;
}

const scalarPort: Pick<LibertyPort, 'range'> = { range: undefined };

const noLogic: PinLogic = {
  function: undefined,
  threeState: undefined,
  stateFunction: undefined,
  internalNode: undefined,
  inputMap: undefined,
  driverType: undefined,
};

function logicOf(groups: PinGroups): PinLogic {
  return {
    function: attribute(groups, 'function'),
    threeState: attribute(groups, 'three_state'),
    stateFunction: attribute(groups, 'state_function'),
    internalNode: attribute(groups, 'internal_node'),
    inputMap: attribute(groups, 'input_map'),
    driverType: attribute(groups, 'driver_type'),
  };
}

function attribute(groups: PinGroups, name: string): LibertyText | undefined {
  for (const { attributes } of groups) {
    const value = attributes.get(name)?.[0];
    if (value !== undefined) return value;
  }
  return undefined;
}

const directions: ReadonlySet<string> = new Set<PinDirection>([
  ...(['input', 'output', 'inout', 'internal'] as const),
]);

/** The direction as written; where it is missing, a pin with a function is an output. */
function directionOf(draft: CellDraft, groups: PinGroups, logic: PinLogic): PinDirection {
  const value = attribute(groups, 'direction');
  const text = value?.text.trim().toLowerCase() ?? '';
  if (directions.has(text)) return text as PinDirection;
  if (value !== undefined) {
    const message = `a direction is input, output, inout or internal, got ${value.text}`;
    draft.report('syntax-error', message, value);
  }
  const { function: own, stateFunction, internalNode } = logic;
  return own === undefined && stateFunction === undefined && internalNode === undefined
    ? 'input'
    : 'output';
}

function busRange(draft: CellDraft, group: LibertyGroup): BitRange | undefined {
  const name = group.names[0]?.text ?? '';
  const typeName = group.attributes.get('bus_type')?.[0];
  if (typeName === undefined) {
    const message = `bus ${name} has no bus_type, which tells its bits`;
    draft.report('range-invalid', message, group);
    return undefined;
  }
  const type = draft.type(typeName.text);
  if (type === undefined) {
    const message = `no type group describes ${typeName.text}, the type of bus ${name}`;
    draft.report('name-undeclared', message, typeName);
    return undefined;
  }
  const range = rangeOfType(type);
  if (range === undefined) {
    const message =
      `bit_width, bit_from and bit_to of type ${typeName.text} do not make a range ` +
      `of ${MAX_BITS} bits at most`;
    draft.report('range-invalid', message, type);
  }
  return range;
}

function reportNoBit(draft: CellDraft, text: LibertyText, bus: string, range: BitRange): void {
  const message = `${text.text} is no bit of bus ${bus}, which has [${range.from}:${range.to}]`;
  draft.report('range-invalid', message, text);
}
