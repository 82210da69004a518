import type binaryen from 'binaryen';
import { firstResult, firstState, type Program } from '../program/program.js';
import type { BlockEmitter, Emission, Pointers } from './blockEmitter.js';

/** Most outputs that are joined bit by bit in locals; more pass memory, sixteen at a time. */
export const SCALAR_OUTPUTS = 24;

const GROUP = 16;

/** Sixteen or fewer neighbouring output bits, and where their bytes stand. */
export interface OutputGroup {
  readonly first: number;
  readonly count: number;
  /** First of the state bits that they are, or -1 if they pass through the output bytes. */
  readonly state: number;
}

/**
 * Cuts the outputs into groups, except what vectors make, and finds those that are neighbouring
 * state bits, unless `aliases` is false.
 */
export function outputGroups(program: Program, aliases = true): OutputGroup[] {
  const groups: OutputGroup[] = [];
  const { outputs } = program;
  const { outputs: halves = [], rows = [] } = program.vectors ?? {};
  const byVector = new Set([
    ...halves.map(({ to }) => to),
    ...rows.flatMap(({ to, words }) =>
      words.flatMap((word) => [8 * to + 32 * word, 8 * to + 32 * word + GROUP]),
    ),
  ]);
  const states = firstState(program);
  for (let first = 0; first < outputs.length; first += GROUP) {
    if (byVector.has(first)) continue;
    const count = Math.min(GROUP, outputs.length - first);
    const start = outputs[first]!;
    const isState = start >= states && start + count <= firstResult(program);
    const isRun = outputs.subarray(first, first + count).every((value, i) => value === start + i);
    groups.push({ first, count, state: aliases && isState && isRun ? start - states : -1 });
  }
  return groups;
}

/** The output bits of groups that pass through the output bytes. */
export function outputsInMemory(groups: readonly OutputGroup[]): number[] {
  return groups
    .filter(({ state }) => state < 0)
    .flatMap(({ first, count }) => Array.from({ length: count }, (_, i) => first + i));
}

/** Joins output values of the block just emitted into the response row at local `row`. */
export function packFromValues(
  emission: Emission,
  block: BlockEmitter,
  row: number,
): binaryen.ExpressionRef[] {
  const { module, program, i32: type } = emission;
  const { i32 } = module;
  const { outputs } = program;
  if (outputs.length === 0) return [];
  let word = i32.const(0);
  for (const [bit, value] of outputs.entries()) {
    const masked = i32.and(block.value(value).code, i32.const(1));
    const placed = bit === 0 ? masked : i32.shl(masked, i32.const(bit));
    word = bit === 0 ? placed : i32.or(word, placed);
  }
  return [i32.store(0, 4, module.local.get(row, type), word, '0')];
}

/**
 * Joins output bytes into the response row at local `row`: the lowest bits of sixteen bytes become
 * sixteen bits by one shift and one `bitmask`.
 */
export function packFromMemory(
  { module, area, program, i32: type }: Emission,
  groups: readonly OutputGroup[],
  { current, next }: Pointers,
  row: number,
): binaryen.ExpressionRef[] {
  const { i8x16, i32, v128, local } = module;
  const bitsOf = ({ first, count, state }: OutputGroup): binaryen.ExpressionRef => {
    const [pointer, offset] = state < 0 ? [next, area.outputs + first] : [current, state];
    const bytes = v128.load(offset, 1, local.get(pointer, type), '0');
    const bits = i8x16.bitmask(i8x16.shl(bytes, i32.const(7)));
    // Beyond the last output stand other state bits, or what was left of other cycles.
    return count === GROUP ? bits : i32.and(bits, i32.const((1 << count) - 1));
  };
  const statements: binaryen.ExpressionRef[] = [];
  const at = () => local.get(row, type);
  for (let g = 0; g < groups.length; g++) {
    const { first } = groups[g]!;
    const low = bitsOf(groups[g]!);
    const next = groups[g + 1];
    if (first % (2 * GROUP) === 0 && next?.first === first + GROUP) {
      const word = i32.or(low, i32.shl(bitsOf(next), i32.const(GROUP)));
      statements.push(i32.store(first >>> 3, 4, at(), word, '0'));
      g++;
    } else statements.push(storeHalf(module, at(), first, low, program.outputs.length));
  }
  return statements;
}

/**
 * Stores sixteen bits of the response row, from bit `first` on. Where they are the last, the rest of
 * their word becomes 0.
 */
export function storeHalf(
  { i32 }: binaryen.Module,
  row: binaryen.ExpressionRef,
  first: number,
  bits: binaryen.ExpressionRef,
  outputCount: number,
): binaryen.ExpressionRef {
  const isLast = first % (2 * GROUP) === 0 && first + GROUP >= outputCount;
  return isLast
    ? i32.store(first >>> 3, 4, row, bits, '0')
    : i32.store16(first >>> 3, 2, row, bits, '0');
}
