import type { LaneCount } from '../../runtime/laneLayout.js';
import type { ModelLayout, PortLayout } from '../../runtime/layout.js';
import type { PackageCheck } from './check.js';
import { type ReadingOptions, type SourceRecord, sha256 } from './fingerprint.js';
import type { KeepNames } from './keptNets.js';
import type { ResetPort } from './resets.js';

/** The content of `manifest.json`. */
export interface Manifest {
  readonly format: typeof FORMAT;
  readonly model: string;
  readonly tool: { readonly name: 'clockstride'; readonly version: string };
  /** Fingerprint of the netlist; states can be exchanged between packages that have the same. */
  readonly netlist: string;
  readonly sources: readonly SourceRecord[];
  readonly options: ReadingOptions & {
    readonly keepNames: KeepNames;
    readonly unknown: boolean;
    readonly lanes: 1 | LaneCount;
    readonly name?: string;
  };
  readonly inputs: readonly ManifestPort[];
  readonly outputs: readonly ManifestPort[];
  readonly clocks: readonly string[];
  readonly resets: readonly ResetPort[];
  readonly registers: number;
  readonly keptNets: number;
  readonly check: PackageCheck;
  readonly files: Readonly<Record<string, { readonly bytes: number; readonly sha256: string }>>;
}

/** A port with its place in a packed row. */
export type ManifestPort = Pick<PortLayout, 'name' | 'width' | 'offset' | 'msb' | 'lsb'>;

const FORMAT = 'clockstride-package-1';

/** Whether a JSON value is the manifest of a package. */
export const isManifest = (value: unknown): value is Manifest =>
  typeof value === 'object' &&
  value !== null &&
  'format' in value &&
  value.format === FORMAT &&
  'files' in value &&
  typeof value.files === 'object' &&
  value.files !== null;

/** Writes the manifest; `files` are all others of the package, by name. */
export function manifestText(
  about: Omit<Manifest, 'format' | 'inputs' | 'outputs' | 'clocks' | 'registers' | 'files'>,
  layout: ModelLayout,
  files: ReadonlyMap<string, string | Uint8Array>,
): string {
  const { model, tool, netlist, sources, options, resets, keptNets, check } = about;
  const manifest: Manifest = {
    format: FORMAT,
    model,
    tool,
    netlist,
    sources,
    options,
    inputs: layout.inputs.ports.map(manifestPort),
    outputs: layout.outputs.ports.map(manifestPort),
    clocks: layout.clocks,
    resets,
    registers: layout.stateNames.length,
    keptNets,
    check,
    files: Object.fromEntries(Array.from(files, ([name, content]) => [name, recordOf(content)])),
  };
  return `${JSON.stringify(manifest, null, 2)}\n`;
}

const manifestPort = ({ name, width, offset, msb, lsb }: PortLayout): ManifestPort => ({
  name,
  width,
  offset,
  msb,
  lsb,
});

const recordOf = (content: string | Uint8Array) => ({
  bytes: Buffer.byteLength(content),
  sha256: sha256(content),
});
