import { rowStride } from '../layout.js';
import { fromBase64, toBase64 } from './base64.js';
import type { Standing } from './core.js';
import type { Description } from './description.js';
import { sha256 } from './sha256.js';
import { shown } from './values.js';

/**
 * Where a model stood, as plain data that JSON carries.
 *
 * It fits every package of the same netlist, whatever its other options; a state with x in it only
 * those that have x.
 */
export interface SavedState {
  readonly format: typeof FORMAT;
  /** Name of the model. */
  readonly model: string;
  /** Fingerprints of the netlist and of the list of its state elements. */
  readonly netlist: string;
  readonly elements: string;
  readonly cycle: number;
  /** Bits, least significant first, in base64: which state elements are 1, and which are x. */
  readonly state: string;
  readonly unknown?: string;
  /** Packed rows of the inputs now and in the cycle before, values and x. */
  readonly inputs: string;
  readonly unknownInputs?: string;
  readonly before?: string;
  readonly unknownBefore?: string;
  /** Contents of memories. */
  readonly memories?: string;
}

const FORMAT = 'clockstride-state-1';

/** Writes down where a model stands. */
export function saved(description: Description, standing: Standing): SavedState {
  const { layout } = description.model;
  const { state, inputs, before, memories, cycle } = standing;
  const unknown = packed(state, 2);
  return {
    format: FORMAT,
    model: layout.name,
    netlist: description.netlist,
    elements: elementsOf(description),
    cycle,
    state: toBase64(packed(state, 1)),
    ...(unknown.some((byte) => byte !== 0) && { unknown: toBase64(unknown) }),
    ...rowFields(description, inputs, 'inputs', 'unknownInputs'),
    ...(before && rowFields(description, before, 'before', 'unknownBefore')),
    ...(memories.length > 0 && { memories: toBase64(memories) }),
  } as SavedState;
}

/**
 * Reads what `saved` wrote, as an object or as JSON. Throws TypeError for what is no saved state,
 * RangeError for one that this model cannot take.
 */
export function standingOf(
  description: Description,
  given: unknown,
  memoryBytes: number,
): Standing {
  const save = fieldsOf(given);
  refuseForeign(description, save);
  const { layout } = description.model;
  const count = layout.stateNames.length;
  const ones = bytesOf(save, 'state', (count + 7) >>> 3);
  const xs = save.unknown === undefined ? undefined : bytesOf(save, 'unknown', (count + 7) >>> 3);
  const bit = (bytes: Uint8Array, i: number): number => (bytes[i >>> 3]! >>> (i & 7)) & 1;
  const state = Uint8Array.from({ length: count }, (_, i) =>
    xs !== undefined && bit(xs, i) === 1 ? 2 : bit(ones, i),
  );
  const x = state.indexOf(2);
  if (x >= 0 && !layout.threeValued) {
    const name = layout.stateNames[x]!;
    throw new RangeError(`expected a state of 0 and 1, got x in ${name}: this model has no x`);
  }
  if (!Number.isSafeInteger(save.cycle) || (save.cycle as number) < 0) {
    throw new TypeError(`expected cycle to be a count, got ${shown(save.cycle)}`);
  }
  return {
    cycle: save.cycle as number,
    state,
    inputs: rowOf(description, save, 'inputs', 'unknownInputs'),
    before:
      save.before === undefined ? undefined : rowOf(description, save, 'before', 'unknownBefore'),
    memories:
      save.memories === undefined
        ? new Uint8Array(memoryBytes)
        : bytesOf(save, 'memories', memoryBytes),
  };
}

type Fields = Readonly<Record<string, unknown>>;

function fieldsOf(given: unknown): Fields {
  let save = given;
  if (typeof given === 'string') {
    try {
      save = JSON.parse(given);
    } catch {
      throw new TypeError(`expected a saved state, got ${shown(given)}, which is no JSON`);
    }
  }
  if (typeof save !== 'object' || save === null) {
    throw new TypeError(`expected a saved state, got ${shown(save)}`);
  }
  const { format } = save as Fields;
  if (format !== FORMAT) {
    throw new TypeError(`expected a saved state of format ${FORMAT}, got ${shown(format)}`);
  }
  return save as Fields;
}

function refuseForeign(description: Description, { model, netlist, elements }: Fields): void {
  const { name } = description.model.layout;
  if (netlist !== description.netlist) {
    const own = `${name} (netlist ${description.netlist})`;
    throw new RangeError(`expected a state of ${own}, got one of ${model} (netlist ${netlist})`);
  }
  if (elements !== elementsOf(description)) {
    throw new RangeError(
      `expected the state elements of this package of ${name}, got those of a package that was ` +
        'made by another version',
    );
  }
}

const DIGITS = 16;
const elementDigests = new WeakMap<Description, string>();

function elementsOf(description: Description): string {
  const known = elementDigests.get(description);
  if (known !== undefined) return known;
  const names = description.model.layout.stateNames.join('\n');
  const digest = sha256(new TextEncoder().encode(names)).slice(0, DIGITS);
  elementDigests.set(description, digest);
  return digest;
}

function packed(state: Uint8Array, value: number): Uint8Array {
  const bytes = new Uint8Array((state.length + 7) >>> 3);
  for (let i = 0; i < state.length; i++) if (state[i] === value) bytes[i >>> 3]! |= 1 << (i & 7);
  return bytes;
}

function rowFields(
  { model: { layout } }: Description,
  row: Uint32Array,
  values: string,
  unknown: string,
): Record<string, string> {
  const group = (from: number): Uint8Array => {
    const bytes = new DataView(new ArrayBuffer(4 * layout.inputs.words));
    for (let i = 0; i < layout.inputs.words; i++) bytes.setUint32(4 * i, row[from + i]!, true);
    return new Uint8Array(bytes.buffer);
  };
  const xs = layout.threeValued ? group(layout.inputs.words) : new Uint8Array(0);
  return {
    [values]: toBase64(group(0)),
    ...(xs.some((byte) => byte !== 0) && { [unknown]: toBase64(xs) }),
  };
}

function rowOf(
  { model: { layout } }: Description,
  save: Fields,
  values: string,
  unknown: string,
): Uint32Array {
  const { words } = layout.inputs;
  const row = new Uint32Array(rowStride(layout.inputs, layout.threeValued));
  const load = (field: string, at: number): void => {
    const bytes = new DataView(bytesOf(save, field, 4 * words).buffer);
    for (let i = 0; i < words; i++) row[at + i] = bytes.getUint32(4 * i, true);
  };
  load(values, 0);
  if (save[unknown] === undefined) return row;
  if (!layout.threeValued) {
    throw new RangeError(`expected ${values} of 0 and 1, got x: this model has no x`);
  }
  load(unknown, words);
  return row;
}

function bytesOf(save: Fields, field: string, length: number): Uint8Array<ArrayBuffer> {
  const text = save[field];
  let bytes: Uint8Array<ArrayBuffer> | undefined;
  try {
    if (typeof text === 'string') bytes = fromBase64(text);
  } catch {
    // Told below, like every other kind of text that is not what it should be.
  }
  if (bytes?.length === length) return bytes;
  throw new TypeError(`expected ${field} to be ${length} bytes in base64, got ${shown(text)}`);
}
