import type { NetId } from '../../../circuit/ids.js';
import type { Position } from '../../../diagnostics/sourceMap.js';
import type { HeldMemory } from '../scope.js';
import type { Bits, Logic } from './logic.js';
import { selectFrom } from './tables.js';

/** A word of a held memory that a process writes, and the condition under which it does. */
export interface WordWrite {
  readonly memory: HeldMemory;
  readonly when: NetId;
  readonly address: Bits;
  /** As many bits as a word has. */
  readonly data: Bits;
  /** Per bit whether it is written. */
  readonly mask: Bits;
  /** Where the text writes it. */
  readonly place: Position;
}

/** A word as writes, one after another, have left it that was `stored` before. */
export function forwarded(
  writes: readonly WordWrite[],
  address: Bits,
  stored: Bits,
  logic: Logic,
): Bits {
  let word = stored;
  for (const { when, address: written, data, mask } of writes) {
    const isSame = logic.all([when, ...address.map((bit, i) => logic.xnor(bit, written[i]!))]);
    if (logic.valueOf(isSame) === 0) continue;
    word = word.map((net, bit) => logic.mux(logic.and(isSame, mask[bit]!), net, data[bit]!));
  }
  return word;
}

/**
 * The writes of two branches of which the first is taken where `condition` is 1.
 *
 * The n-th writes of both to one memory become one, with its address and data chosen: a processor's
 * instructions that write to one memory then share a port.
 */
export function eitherWrites(
  condition: NetId,
  whenTrue: readonly WordWrite[],
  whenFalse: readonly WordWrite[],
  logic: Logic,
): readonly WordWrite[] {
  if (whenTrue.length === 0 && whenFalse.length === 0) return whenTrue;
  const otherwise = logic.not(condition);
  return paired([whenTrue, whenFalse], ([one, zero]) => {
    if (zero === undefined) return { ...one!, when: logic.and(condition, one!.when) };
    if (one === undefined) return { ...zero, when: logic.and(otherwise, zero.when) };
    const choose = (ones: Bits, zeros: Bits): Bits =>
      ones.map((net, i) => logic.mux(condition, zeros[i]!, net));
    return {
      memory: one.memory,
      when: logic.mux(condition, zero.when, one.when),
      address: choose(one.address, zero.address),
      data: choose(one.data, zero.data),
      mask: choose(one.mask, zero.mask),
      place: one.place,
    };
  });
}

/** The writes of branches of which number `index[i]` is taken where `select` has the value i. */
export function tableWrites(
  select: Bits,
  index: readonly number[],
  branches: readonly (readonly WordWrite[])[],
  logic: Logic,
): readonly WordWrite[] {
  if (branches.every((writes) => writes.length === 0)) return [];
  return paired(branches, (writes) => {
    const leaf = (i: number): WordWrite | undefined => writes[index[i]!];
    const some = writes.find((write) => write !== undefined)!;
    const choose = (bits: (write: WordWrite) => Bits): Bits =>
      bits(some).map((_, bit) => {
        const chosen = (i: number): NetId | undefined => {
          const write = leaf(i);
          return write && bits(write)[bit];
        };
        return selectFrom(select, chosen, logic)!;
      });
    return {
      memory: some.memory,
      when: selectFrom(select, (i) => leaf(i)?.when ?? logic.zero, logic)!,
      address: choose(({ address }) => address),
      data: choose(({ data }) => data),
      mask: choose(({ mask }) => mask),
      place: some.place,
    };
  });
}

// The n-th writes to each memory side by side; the order in every branch stays.
function paired(
  branches: readonly (readonly WordWrite[])[],
  join: (writes: readonly (WordWrite | undefined)[]) => WordWrite,
): WordWrite[] {
  const memories = new Set(branches.flatMap((writes) => writes.map(({ memory }) => memory)));
  return [...memories].flatMap((memory) => {
    const own = branches.map((writes) => writes.filter((write) => write.memory === memory));
    const count = own.reduce((most, { length }) => Math.max(most, length), 0);
    return Array.from({ length: count }, (_, n) => join(own.map((writes) => writes[n])));
  });
}

/**
 * Joins writes that follow one another, to one address and to bits of which each is written by one
 * of them at most, as byte enables make them.
 */
export function joinedWrites(writes: readonly WordWrite[], logic: Logic): WordWrite[] {
  const joined: WordWrite[] = [];
  for (const write of writes) {
    if (logic.valueOf(write.when) === 0) continue;
    const last = joined[joined.length - 1];
    const both = last && together(last, write, logic);
    if (both === undefined) joined.push(write);
    else joined[joined.length - 1] = both;
  }
  return joined;
}

function together(first: WordWrite, then: WordWrite, logic: Logic): WordWrite | undefined {
  if (first.memory !== then.memory) return undefined;
  if (first.address.some((net, i) => net !== then.address[i])) return undefined;
  const isNever = (net: NetId): boolean => logic.valueOf(net) === 0;
  const isApart = first.mask.every((net, bit) => isNever(net) || isNever(then.mask[bit]!));
  if (!isApart && logic.valueOf(first.when) !== 1) return undefined;
  if (!isApart && first.mask.some((net) => logic.valueOf(net) !== 1)) return undefined;
  const over = then.mask.map((net) => logic.and(then.when, net));
  const mask = first.mask.map((net, bit) => logic.or(logic.and(first.when, net), over[bit]!));
  const data = first.data.map((net, bit) => {
    if (isNever(first.mask[bit]!)) return then.data[bit]!;
    return isNever(then.mask[bit]!) ? net : logic.mux(over[bit]!, net, then.data[bit]!);
  });
  const when = logic.or(first.when, then.when);
  return { ...first, when, data, mask };
}
