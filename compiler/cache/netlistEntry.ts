import { deserialize, serialize } from 'node:v8';
import type { Circuit } from '../circuit/circuit.js';
import type { Tables } from '../circuit/tables/tableColumns.js';
import type { Diagnostic } from '../diagnostics/diagnostics.js';
import type { Source, Span } from '../diagnostics/source.js';
import { type PackedHierarchy, packHierarchy, unpackHierarchy } from './packedNames.js';
import { type PackedTable, packTable, unpackTable } from './packedTables.js';

/** A circuit and what its readers had to say. */
export interface ReadCircuit {
  readonly circuit: Circuit;
  readonly found: readonly Diagnostic[];
}

/** A file that was looked for while reading: the SHA-256 of its bytes, undefined if it is not there. */
export interface LookedFor {
  readonly path: string;
  readonly hash: string | undefined;
}

interface PackedSpan extends Omit<Span, 'source'> {
  readonly path: string;
}

interface PackedDiagnostic extends Omit<Diagnostic, 'span' | 'related'> {
  readonly span?: PackedSpan;
  readonly related?: readonly { readonly message: string; readonly span: PackedSpan }[];
}

interface PackedCircuit extends Omit<Circuit, 'hierarchy' | 'tables' | 'sources'> {
  readonly hierarchy: PackedHierarchy;
  readonly tables: Omit<Tables, 'definitions'> & { readonly definitions: readonly PackedTable[] };
  /** Their paths. */
  readonly sources: readonly string[];
}

interface NetlistEntry {
  readonly lookedFor: readonly LookedFor[];
  readonly circuit: PackedCircuit;
  readonly found: readonly PackedDiagnostic[];
}

/** Writes a circuit, all but the texts that it was read from. */
export function packNetlist(
  { circuit, found }: ReadCircuit,
  lookedFor: readonly LookedFor[],
): Uint8Array {
  const { hierarchy, tables, sources, ...rest } = circuit;
  const entry: NetlistEntry = {
    lookedFor,
    circuit: {
      ...rest,
      hierarchy: packHierarchy(hierarchy),
      tables: { ...tables, definitions: tables.definitions.map(packTable) },
      sources: sources.map(({ path }) => path),
    },
    found: found.map(packDiagnostic),
  };
  return serialize(entry);
}

/** What `packNetlist` was given: the files looked for at once, the rest by `restore`. */
export function unpackNetlist(bytes: Uint8Array): {
  readonly lookedFor: readonly LookedFor[];
  /** `sourceOf` has the text of each file by its path. */
  restore(sourceOf: (path: string) => Source): ReadCircuit;
} {
  const { lookedFor, circuit, found } = deserialize(bytes) as NetlistEntry;
  return {
    lookedFor,
    restore: (sourceOf) => {
      const { hierarchy, tables, sources, ...rest } = circuit;
      return {
        circuit: {
          ...rest,
          hierarchy: unpackHierarchy(hierarchy),
          tables: { ...tables, definitions: tables.definitions.map(unpackTable) },
          sources: sources.map(sourceOf),
        },
        found: found.map((packed) => unpackDiagnostic(packed, sourceOf)),
      };
    },
  };
}

const packSpan = ({ source, start, end }: Span): PackedSpan => ({ path: source.path, start, end });

function packDiagnostic({ span, related, ...rest }: Diagnostic): PackedDiagnostic {
  return {
    ...rest,
    ...(span && { span: packSpan(span) }),
    ...(related && {
      related: related.map(({ message, span: place }) => ({ message, span: packSpan(place) })),
    }),
  };
}

function unpackDiagnostic(
  { span, related, ...rest }: PackedDiagnostic,
  sourceOf: (path: string) => Source,
): Diagnostic {
  const unpack = ({ path, start, end }: PackedSpan): Span => ({
    ...{ source: sourceOf(path), start, end },
  });
  return {
    ...rest,
    ...(span && { span: unpack(span) }),
    ...(related && {
      related: related.map(({ message, span: place }) => ({ message, span: unpack(place) })),
    }),
  };
}
