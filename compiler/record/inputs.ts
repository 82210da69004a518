import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import type { RecordedInput } from './manifest.js';
import { sha256 } from './sealedText.js';

/** An input whose bytes are at hand. */
export const inputOf = (role: string, path: string, bytes: Uint8Array): RecordedInput => ({
  role,
  path,
  bytes: bytes.length,
  sha256: sha256(bytes),
});

/** An input that is read once to be hashed. Throws what the file system throws. */
export async function hashedInput(role: string, path: string): Promise<RecordedInput> {
  const hash = createHash('sha256');
  for await (const piece of createReadStream(path, { highWaterMark: 1 << 20 })) hash.update(piece);
  return { role, path, bytes: (await stat(path)).size, sha256: hash.digest('hex') };
}

/** What differs between the inputs of a record and those found now: a line each. */
export function changedInputs(
  recorded: readonly RecordedInput[],
  found: readonly RecordedInput[],
): string[] {
  const now = new Map(found.map((input) => [`${input.role} ${input.path}`, input]));
  const changes = recorded.flatMap(({ role, path, sha256: hash }) => {
    const input = now.get(`${role} ${path}`);
    if (input === undefined) return [`${path}: this ${role} is not read any more`];
    return input.sha256 === hash ? [] : [`${path}: this ${role} has changed since`];
  });
  const known = new Set(recorded.map(({ role, path }) => `${role} ${path}`));
  const added = found.filter(({ role, path }) => !known.has(`${role} ${path}`));
  return [...changes, ...added.map(({ role, path }) => `${path}: this ${role} was not read then`)];
}
