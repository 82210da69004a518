import { Source } from '../diagnostics/source.js';
import { type CacheStore, sha256 } from './cacheStore.js';
import { type LookedFor, packNetlist, type ReadCircuit, unpackNetlist } from './netlistEntry.js';

/** What reading a netlist depends on, besides the files that it finds while reading. */
export interface NetlistRequest {
  /** The files that were named, each with its text. */
  readonly named: readonly { readonly path: string; readonly bytes: Uint8Array }[];
  /** All else that readers are told, as plain data. */
  readonly options: unknown;
}

/** A circuit that need not be read again. */
export interface KnownNetlist extends ReadCircuit {
  /** See `NetlistCache.keep`. */
  readonly id: string;
  /** The files that reading found besides those named. */
  readonly included: readonly Source[];
}

/** Circuits that have been read before. */
export class NetlistCache {
  readonly #store: CacheStore;

  constructor(store: CacheStore) {
    this.#store = store;
  }

  /**
   * The circuit that reading would give, if it is known: all files must be as they were, and those
   * must be missing that were. `read` gives the bytes of a file, undefined if there is none.
   */
  find(
    request: NetlistRequest,
    read: (path: string) => Uint8Array | undefined,
  ): KnownNetlist | undefined {
    const key = this.#keyOf(request);
    const entry = this.#store.get(key);
    if (entry === undefined) return undefined;
    const { lookedFor, restore } = unpackNetlist(entry);
    const included: Source[] = [];
    for (const { path, hash } of lookedFor) {
      const bytes = read(path);
      if (hashOf(bytes) !== hash) return undefined;
      if (bytes !== undefined) included.push(new Source(path, bytes));
    }
    const named = request.named.map(({ path, bytes }) => new Source(path, bytes));
    const sources = new Map([...named, ...included].map((file) => [file.path, file]));
    const known = restore((path) => sources.get(path)!);
    return { ...known, included, id: this.#idOf(key, lookedFor) };
  }

  /**
   * Notes a circuit that has been read. `looked` are the files that were looked for meanwhile, in
   * order, with their bytes. Returns what tells the circuit from all others.
   */
  keep(
    request: NetlistRequest,
    looked: readonly { readonly path: string; readonly bytes: Uint8Array | undefined }[],
    netlist: ReadCircuit,
  ): string {
    const key = this.#keyOf(request);
    const lookedFor = looked.map(({ path, bytes }) => ({ path, hash: hashOf(bytes) }));
    const paths = new Set([...request.named, ...looked].map(({ path }) => path));
    // A text that is in no file could not be had again.
    if (textsOf(netlist).every(({ path }) => paths.has(path))) {
      this.#store.later(key, () => packNetlist(netlist, lookedFor));
    }
    return this.#idOf(key, lookedFor);
  }

  #keyOf({ named, options }: NetlistRequest): string {
    const files = named.map(({ path, bytes }) => [path, hashOf(bytes)]);
    return this.#store.keyOf('netlist', files, options);
  }

  #idOf(key: string, lookedFor: readonly LookedFor[]): string {
    return this.#store.keyOf('circuit', key, lookedFor);
  }
}

const textsOf = ({ circuit, found }: ReadCircuit): Source[] => [
  ...circuit.sources,
  ...found
    .flatMap(({ span, related = [] }) => [span, ...related.map((place) => place.span)])
    .flatMap((span) => (span === undefined ? [] : [span.source])),
];

const hashOf = (bytes: Uint8Array | undefined): string | undefined =>
  bytes && sha256(bytes).toString('hex');
