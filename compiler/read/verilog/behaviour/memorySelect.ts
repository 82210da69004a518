import type { NetId } from '../../../circuit/ids.js';
import type { IndexRange, MemoryBinding } from '../scope.js';
import type { Expression, NameExpression, SelectExpression } from '../syntax.js';
import type { Context } from './context.js';
import { type IndexValue, indexValue, warnOutside } from './indexValue.js';
import type { Bits, Logic } from './logic.js';
import { meaningOf, refuse } from './names.js';
import { pathText, report } from './report.js';
import { indexIs, indexOf, readWindow } from './window.js';

/** The largest array, in bits, whose words are nets that a variable index chooses from. */
export const REGISTER_LIMIT = 65536;

/** A select of a word: one index for each that the array has. */
export interface WordSelect {
  readonly memory: MemoryBinding;
  readonly name: NameExpression;
  /** Outermost first, with the select that each stands in. */
  readonly selects: readonly SelectExpression[];
}

/** A select as that of a word of an array; undefined where it is none. */
export function wordSelectOf(expression: Expression, context: Context): WordSelect | undefined {
  const selects: SelectExpression[] = [];
  let node = expression;
  for (; node.kind === 'select'; node = node.base) selects.push(node);
  if (node.kind !== 'name' || selects.length === 0) return undefined;
  const memory = meaningOf(node, context);
  if (memory?.kind !== 'memory' || memory.indices.length !== selects.length) return undefined;
  return { memory, name: node, selects: selects.reverse() };
}

/** Width of the words of an array. */
export const wordWidth = ({ msb, lsb }: MemoryBinding): number => Math.abs(msb - lsb) + 1;

/** Number of words of an array. */
export const wordCount = ({ indices }: MemoryBinding): number =>
  indices.reduce((product, { low, high }) => product * (high - low + 1), 1);

/** The values of all indices of a word; a word where there is no such word, and why. */
export function indexValues(
  { memory, selects }: WordSelect,
  context: Context,
): readonly IndexValue[] | 'unknown' | 'outside' {
  const values = selects.map(({ index }) => indexValue(index, context));
  if (values.some(({ kind }) => kind === 'unknown')) return 'unknown';
  for (const [i, value] of values.entries()) {
    const { low, high } = memory.indices[i]!;
    if (value.kind !== 'constant' || (value.value >= low && value.value <= high)) continue;
    warnOutside(selects[i]!, low, high, context);
    return 'outside';
  }
  return values;
}

/** The number of the word that constant indices mean; undefined where they are not all constant. */
export function constantWord(
  { indices }: MemoryBinding,
  values: readonly IndexValue[],
): number | undefined {
  let word = 0;
  for (const [i, value] of values.entries()) {
    if (value.kind !== 'constant') return undefined;
    const { low, high } = indices[i]!;
    word = word * (high - low + 1) + value.value - low;
  }
  return word;
}

/** The words that indices may mean, each with the condition under which they do. */
export function wordsMeant(
  { indices }: MemoryBinding,
  values: readonly IndexValue[],
  logic: Logic,
): { word: number; when: NetId }[] {
  let words = [{ word: 0, when: logic.one }];
  for (const [i, value] of values.entries()) {
    const { low, high } = indices[i]!;
    const places = placesOf(value, indices[i]!, logic);
    words = words.flatMap(({ word, when }) =>
      places.map(({ place, isIt }) => ({
        word: word * (high - low + 1) + place,
        when: logic.and(when, isIt),
      })),
    );
  }
  return words;
}

function placesOf(
  value: IndexValue,
  { low, high }: IndexRange,
  logic: Logic,
): { place: number; isIt: NetId }[] {
  if (value.kind === 'constant') return [{ place: value.value - low, isIt: logic.one }];
  if (value.kind === 'unknown') return [];
  const index = indexOf(value.bits, value.signed, low, high, logic);
  return Array.from({ length: high - low + 1 }, (_, place) => ({
    place,
    isIt: indexIs(index, low + place, logic),
  }));
}

/** What is read of nets, and what there is where there is no net. */
interface NetView {
  readonly bit: (net: NetId) => NetId;
  readonly outside: NetId;
}

/** The word that indices mean out of words that are nets, by a tree of multiplexers. */
export function readNets(
  memory: MemoryBinding,
  values: readonly IndexValue[],
  view: NetView,
  logic: Logic,
): Bits {
  const readers = values.map((value, i) =>
    indexReader(value, memory.indices[i]!, view.outside, logic),
  );
  const read = (bit: number, at: number, word: number): NetId => {
    const reader = readers[at];
    if (reader === undefined) return view.bit(memory.words[word]![bit]!);
    const { low, high } = memory.indices[at]!;
    const first = word * (high - low + 1);
    return reader((place) => read(bit, at + 1, first + place));
  };
  return Array.from({ length: wordWidth(memory) }, (_, bit) => read(bit, 0, 0));
}

type IndexReader = (leaf: (place: number) => NetId) => NetId;

function indexReader(
  value: IndexValue,
  { low, high }: IndexRange,
  outside: NetId,
  logic: Logic,
): IndexReader {
  if (value.kind === 'constant') return (leaf) => leaf(value.value - low);
  if (value.kind === 'unknown') return () => outside;
  const index = indexOf(value.bits, value.signed, low, high, logic);
  return (leaf) => {
    const inside = (i: number): NetId => (i < low || i > high ? outside : leaf(i - low));
    return readWindow(index, 1, inside, logic, outside)[0]!;
  };
}

/** Says that an array is selected with too few or too many indices. */
export function reportIndices(base: NameExpression | SelectExpression, context: Context): boolean {
  let name: Expression = base;
  let depth = 0;
  for (; name.kind === 'select'; name = name.base) depth++;
  const binding = name.kind === 'name' ? meaningOf(name, context) : undefined;
  if (binding?.kind !== 'memory' || depth >= binding.indices.length) return false;
  const { shared } = context.scope;
  const text = pathText(shared, (name as NameExpression).path);
  const count = binding.indices.length;
  const message = `\`${text}\` is an array; select a word of it by ${count === 1 ? 'an index' : `${count} indices`}`;
  report(shared, 'range-invalid', base, message);
  return true;
}

/** Whether words that are nets are few enough for multiplexers; a diagnostic if not. */
export function withinMemoryLimit(
  { memory, name, selects }: WordSelect,
  context: Context,
): boolean {
  const bits = wordCount(memory) * wordWidth(memory);
  if (bits <= REGISTER_LIMIT) return true;
  refuse(
    context,
    selects.at(-1) ?? name,
    `an array of ${bits} bits is more than can be built from registers or nets ` +
      `(${REGISTER_LIMIT}); make it smaller, or a \`reg\` array that nothing but clock edges writes`,
  );
  return false;
}
