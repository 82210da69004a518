import { sameAddress } from '../../circuit/addresses.js';
import type { Algebra, NetValue } from './algebra.js';
import type { PendingWrite } from './memoryLogic.js';

/** Whether two lists write the same: to do so twice changes nothing. */
export function areAlike(a: readonly PendingWrite[], b: readonly PendingWrite[]): boolean {
  return a.length === b.length && a.every((write, i) => isAlike(write, b[i]!));
}

function isAlike(a: PendingWrite, b: PendingWrite): boolean {
  const columns = [
    [a.address, b.address],
    [a.data, b.data],
    [a.mask ?? [], b.mask ?? []],
  ] as const;
  const isSame = (one: readonly NetValue[], other: readonly NetValue[]): boolean =>
    one.length === other.length && one.every((value, i) => value === other[i]);
  return (
    a.memory === b.memory &&
    a.enable === b.enable &&
    columns.every(([one, other]) => isSame(one, other))
  );
}

/**
 * Writes that leave x where they would change anything, as behind a wave that must be the last.
 *
 * What a later one of them writes over for sure counts for nothing.
 */
export function doubtful(algebra: Algebra, writes: readonly PendingWrite[]): PendingWrite[] {
  return writes.map((write, i) => {
    const later = writes.slice(i + 1).filter(({ memory }) => memory === write.memory);
    const enable = algebra.and(write.enable, algebra.unknown);
    if (later.length === 0) return { ...write, enable };
    const mask = write.data.map((_, bit) =>
      later.reduce(
        (open, over) => {
          const isSame = sameAddress(algebra, write.address, over.address);
          const isOver = algebra.and(algebra.and(over.enable, isSame), bitMask(algebra, over, bit));
          return algebra.and(open, algebra.not(isOver));
        },
        bitMask(algebra, write, bit),
      ),
    );
    return { ...write, enable, mask };
  });
}

const bitMask = (algebra: Algebra, { mask }: PendingWrite, bit: number): NetValue =>
  mask?.[bit] ?? algebra.one;
