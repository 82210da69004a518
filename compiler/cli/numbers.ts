import { InvalidArgumentError } from 'commander';

/** Reads a count, such as a number of cycles; `1_000_000` is one too. */
export function countArgument(text: string): number {
  const value = /^\d[\d_]*$/.test(text) ? Number(text.replaceAll('_', '')) : Number.NaN;
  if (!Number.isSafeInteger(value)) {
    throw new InvalidArgumentError('Give a whole number from 0 on.');
  }
  return value;
}

/** Reads a seed, decimal or `0x…`, of any size. */
export function seedArgument(text: string): bigint {
  if (!/^(\d+|0x[0-9a-f]+)$/i.test(text)) throw new InvalidArgumentError('Give a whole number.');
  return BigInt(text);
}

/** Reads a whole number from 1 on. */
export function positiveArgument(text: string): number {
  const value = countArgument(text);
  if (value === 0) throw new InvalidArgumentError('Give a whole number from 1 on.');
  return value;
}
