import { createHash } from 'node:crypto';
import { basename } from 'node:path';
import type { Design } from '../compile.js';

/** SHA-256 in lower-case hexadecimal. */
export const sha256 = (content: string | Uint8Array): string =>
  createHash('sha256').update(content).digest('hex');

/** A source as the manifest names it. */
export interface SourceRecord {
  /** Without its folder. */
  readonly file: string;
  readonly sha256: string;
}

/** What decides, beside the sources, which circuit is read from them. */
export interface ReadingOptions {
  readonly top?: string;
  readonly define?: Readonly<Record<string, string>>;
  /** Module names. */
  readonly blackBox?: readonly string[];
  readonly replace?: readonly string[];
  /** As on the command line: `clk=4@1`. */
  readonly clock?: readonly string[];
  /** Bits from which on arrays are memories, where that was chosen. */
  readonly memoriesFrom?: number;
}

/** The sources of a design, in the order in which they were read. */
export function sourceRecords({ circuit }: Design): SourceRecord[] {
  return circuit.sources.map(({ path, bytes }) => ({
    file: basename(path),
    sha256: sha256(bytes),
  }));
}

/** One value for all that makes a circuit: contents of the sources, not their names, and choices. */
export function netlistFingerprint(
  { circuit }: Design,
  sources: readonly SourceRecord[],
  options: ReadingOptions,
): string {
  const { define = {}, blackBox = [], replace = [], clock = [], memoriesFrom } = options;
  const choices = [circuit.name, define, blackBox, replace, clock];
  if (memoriesFrom !== undefined) choices.push([`${memoriesFrom}`]);
  return sha256(JSON.stringify([...sources.map((source) => source.sha256), ...choices]));
}
