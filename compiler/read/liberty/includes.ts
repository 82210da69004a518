import type { Source } from '../../diagnostics/source.js';
import type { Position, SourceMap } from '../../diagnostics/sourceMap.js';
import { faultOfText } from '../textForm.js';
import type { Problems } from '../verilog/problems.js';

/** What `readLiberty` may be told. */
export interface LibertyOptions {
  /** Finds the file that an `include_file` in another file names; undefined if there is none. */
  readonly readInclude?: (path: string, from: Source) => Source | undefined;
}

const MAX_DEPTH = 20;
const MAX_INCLUDES = 1000;

// Bytes of files that are included once more.
const MAX_REPEATED = 1 << 26;

/** A text that is being read, and where it begins in the source map. */
export interface OpenSource {
  readonly source: Source;
  readonly base: Position;
}

/** Opens the files of one reading: the first, and those that `include_file` names inside it. */
export class Includes {
  readonly #options: LibertyOptions;
  readonly #sourceMap: SourceMap;
  readonly #problems: Problems;
  readonly #bases = new Map<Source, Position>();
  readonly #open: OpenSource[] = [];
  #count = 0;
  #repeated = 0;

  constructor(options: LibertyOptions, sourceMap: SourceMap, problems: Problems) {
    this.#options = options;
    this.#sourceMap = sourceMap;
    this.#problems = problems;
  }

  /** Begins a source; each `open` and each `include` that gives one needs a `close`. */
  open(source: Source): OpenSource {
    let base = this.#bases.get(source);
    if (base === undefined) {
      base = this.#sourceMap.add(source);
      this.#bases.set(source, base);
    }
    const opened = { source, base };
    this.#open.push(opened);
    return opened;
  }

  close(): void {
    this.#open.pop();
  }

  /** Begins the file that is named between two positions; undefined after a report. */
  include(path: string, start: Position, end: Position): OpenSource | undefined {
    if (this.#open.length > MAX_DEPTH || ++this.#count > MAX_INCLUDES) {
      const isDeep = this.#open.length > MAX_DEPTH;
      const limit = isDeep
        ? `files are included ${MAX_DEPTH} deep`
        : `more than ${MAX_INCLUDES} files are included`;
      const message = `${limit}; does "${path}" include itself?`;
      this.#problems.add('syntax-error', message, start, end);
      if (!isDeep) this.#problems.giveUp();
      return undefined;
    }
    const source = this.#options.readInclude?.(path, this.#open.at(-1)!.source);
    const fault = source && faultOfText(source.bytes);
    if (fault !== undefined) {
      this.#problems.add('file-no-text', `the included file "${path}" ${fault}`, start, end);
      return undefined;
    }
    if (source !== undefined) {
      if (this.#bases.has(source)) this.#repeated += source.bytes.length;
      if (this.#repeated <= MAX_REPEATED) return this.open(source);
      this.#problems.add('syntax-error', `"${path}" is included too often`, start, end);
      this.#problems.giveUp();
      return undefined;
    }
    const message = `the included file "${path}" is not found; name its folder with --include`;
    this.#problems.add('file-unreadable', message, start, end);
    return undefined;
  }
}
