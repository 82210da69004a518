import type binaryen from 'binaryen';
import { CountedWord, countedNumbers } from '../../program/countedWord.js';
import type { LaneModuleParts } from './writeBlock.js';

type Expression = binaryen.ExpressionRef;

/** Locals of the exported `count`, parameters first. */
const Count = {
  Row: 0,
  Unknown: 1,
  Counts: 2,
  Left: 3,
  /** Which of the cycles count, in two halves. */
  Mask: 4,
  MaskHigh: 5,
  Low: 6,
  High: 7,
  UnknownLow: 8,
  UnknownHigh: 9,
} as const;

/**
 * Adds the exported `count(row, unknown, counts, words, mask, maskHigh)` to a module of 128 lanes,
 * which takes them as one sequence of 128 cycles: it adds up the ones and the changes of each word
 * of the response row at `row`, and where it is three-valued, those that are x by `unknown`, of
 * which the words that tell it follow from there. See `CountedWord` for what stands at `counts`.
 *
 * A word that changes to or from x does not change between 0 and 1. Lanes whose mask is 0 count
 * for nothing; they must repeat the last one that counts.
 */
export function addCount(parts: LaneModuleParts, threeValued: boolean): void {
  const { wasm, module } = parts;
  const { i32, i64, local } = module;
  const at = (number: number) => local.get(number, wasm.i32);
  const word = (number: number) => local.get(number, wasm.i64);
  const advance = (number: number, by: number) =>
    local.set(number, i32.add(at(number), i32.const(by)));
  const kept = (slot: number) => i64.load(8 * slot, 8, at(Count.Counts), '0');
  const keep = (slot: number, value: Expression) =>
    i64.store(8 * slot, 8, at(Count.Counts), value, '0');
  const load = (pointer: number, [low, high]: readonly [number, number]) => [
    local.set(low, i64.load(0, 8, at(pointer), '0')),
    local.set(high, i64.load(8, 8, at(pointer), '0')),
  ];
  // What each cycle of a half had before: the half moved up, its first cycle from the half before.
  const before = (half: number, earlier: Expression) =>
    i64.or(i64.shl(word(half), i64.const(1n)), i64.shr_u(earlier, i64.const(63n)));
  const bits = (low: Expression, high: Expression) => i64.add(i64.popcnt(low), i64.popcnt(high));
  const counted = (low: number, high: number) =>
    bits(i64.and(word(low), word(Count.Mask)), i64.and(word(high), word(Count.MaskHigh)));
  const { Low, High, UnknownLow, UnknownHigh } = Count;
  const isKnown = (half: number, earlier: Expression) =>
    i64.xor(i64.or(word(half), before(half, earlier)), i64.const(-1n));
  const changes = (
    half: number,
    earlier: Expression,
    unknown: number,
    unknownBefore: Expression,
  ) => {
    const differs = i64.xor(word(half), before(half, earlier));
    return threeValued ? i64.and(differs, isKnown(unknown, unknownBefore)) : differs;
  };
  const changed = bits(
    changes(Low, kept(CountedWord.Last), UnknownLow, kept(CountedWord.LastUnknown)),
    changes(High, word(Low), UnknownHigh, word(UnknownLow)),
  );
  const body = module.block(null, [
    ...load(Count.Row, [Low, High]),
    ...(threeValued ? load(Count.Unknown, [UnknownLow, UnknownHigh]) : []),
    keep(CountedWord.Changes, i64.add(kept(CountedWord.Changes), changed)),
    keep(CountedWord.Ones, i64.add(kept(CountedWord.Ones), counted(Low, High))),
    keep(CountedWord.Last, word(High)),
    ...(threeValued
      ? [
          keep(
            CountedWord.Unknown,
            i64.add(kept(CountedWord.Unknown), counted(UnknownLow, UnknownHigh)),
          ),
          keep(CountedWord.LastUnknown, word(UnknownHigh)),
          advance(Count.Unknown, 16),
        ]
      : []),
    advance(Count.Row, 16),
    advance(Count.Counts, 8 * countedNumbers(threeValued)),
    advance(Count.Left, -1),
    module.br('word', at(Count.Left)),
  ]);
  const code = module.if(at(Count.Left), module.loop('word', body));
  const { i32: number, i64: half } = wasm;
  const parameters = wasm.createType([number, number, number, number, half, half]);
  module.addFunction('count', parameters, wasm.none, [half, half, half, half], code);
  module.addFunctionExport('count', 'count');
}
