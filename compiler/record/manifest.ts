import { randomBytes } from 'node:crypto';
import type { ModelLayout } from '../../runtime/layout.js';
import type { Design } from '../compile.js';
import { sealed, sha256, unsealed } from './sealedText.js';

/** Name of the manifest in a record. */
export const MANIFEST = 'manifest.json';

const FORM = 'clockstride record 1';

/** A file that a run depends on. */
export interface RecordedInput {
  /** What it is for, to be read in a sentence: `netlist`, `stimulus`, `expectation`. */
  readonly role: string;
  /** As it was named. */
  readonly path: string;
  readonly bytes: number;
  readonly sha256: string;
}

/** What a record says of its run, once and for all. */
export interface Manifest {
  /** Version of the program that made it. */
  readonly version: string;
  /** The words of the command line behind the verb, and the folder in which it was given. */
  readonly command: readonly string[];
  readonly directory: string;
  readonly circuit: string;
  readonly inputs: readonly RecordedInput[];
  /** Hash of the names of ports and state elements, by which a state can be loaded again. */
  readonly layout: string;
  readonly threeValued: boolean;
  readonly stateCount: number;
  /** Set by chance: two runs of the same command are two records. */
  readonly nonce: string;
}

/** Where a run comes from, and what it reads. */
export type RunOrigin = Pick<Manifest, 'version' | 'command' | 'directory' | 'inputs'>;

/** The manifest of a new record of runs of a design. */
export function manifestOf({ layout, circuit }: Design, origin: RunOrigin): Manifest {
  return {
    ...origin,
    circuit: circuit.name,
    layout: layoutHash(layout),
    threeValued: layout.threeValued,
    stateCount: layout.stateNames.length,
    nonce: randomBytes(8).toString('hex'),
  };
}

/** The bytes of a manifest. */
export const encodeManifest = (manifest: Manifest): Uint8Array =>
  sealed({ form: FORM, ...manifest });

/** Reads a manifest. Throws `DamagedFile`. */
export function decodeManifest(bytes: Uint8Array): Manifest {
  const { form, ...manifest } = unsealed(MANIFEST, bytes) as Manifest & { form: string };
  if (form !== FORM) throw new RangeError(`${MANIFEST}: expected form ${FORM}, got ${form}`);
  return manifest;
}

/** What tells a record from all others: it stands in each of its files. */
export const recordId = (manifest: Manifest): string => sha256(encodeManifest(manifest));

/** Hash of all that a layout says. */
export const layoutHash = (layout: ModelLayout): string => sha256(JSON.stringify(layout));
