import { createHash, type Hash } from 'node:crypto';
import {
  closeSync,
  existsSync,
  openSync,
  readSync,
  realpathSync,
  renameSync,
  rmSync,
} from 'node:fs';
import { rowStride } from '../../runtime/layout.js';
import { type ResponseChoice, ResponseTable, type ValueForm } from '../../runtime/node/index.js';
import { PackedResponse } from '../../runtime/node/packed/packedResponse.js';
import { partialPath, WholeFile } from '../../runtime/node/wholeFile.js';
import type { Design } from '../compile.js';
import type { Findings, Outlet, OutletBlock, OutletPlan, RunEnd } from '../run/outlets/outlet.js';
import { INTERRUPTED } from '../run/runSummary.js';

/** What is kept of a response to go on with it. */
export interface SavedResponse {
  /** Tells it from what other outlets save. */
  readonly kind: 'response';
  readonly bytes: number;
  readonly sha256: string;
  /** The last row that could have been written, and its cycle; no row before the first. */
  readonly lastRow: Uint32Array;
  readonly lastCycle: number;
}

/** How a response is written while it is recorded. */
export interface RecordedResponseOptions extends ResponseChoice {
  readonly form?: ValueForm;
  /** Tells the file of one record from those of others. */
  readonly mark: string;
}

/**
 * Writes the response to a plain file, like `writeResponse`, in a way that it can be gone on with:
 * until the run is over it stands beside the target in a hidden file, which an interruption leaves.
 */
export function recordedResponse(path: string, options: RecordedResponseOptions): OutletPlan {
  return {
    open: ({ design, saved }) =>
      new RecordedResponse(path, options, design, saved as SavedResponse | undefined),
  };
}

/**
 * Whether what was written up to a checkpoint is still there as it was. Where the run was over and
 * the file has its name already, it is taken back.
 */
export function isIntact(path: string, mark: string, saved: SavedResponse): boolean {
  const target = existsSync(path) ? realpathSync(path) : path;
  const partial = partialPath(target, mark);
  if (existsSync(partial)) return prefixHash(partial, saved.bytes) === saved.sha256;
  if (!existsSync(target) || prefixHash(target, saved.bytes) !== saved.sha256) return false;
  renameSync(target, partial);
  return true;
}

/** Removes what was written of a response, where nothing is to go on with it. */
export function forget(path: string, mark: string): void {
  const target = existsSync(path) ? realpathSync(path) : path;
  rmSync(partialPath(target, mark), { force: true });
}

class RecordedResponse implements Outlet {
  readonly wantsResponse = true;
  readonly #file: WholeFile;
  readonly #form: ResponseTable | PackedResponse;
  readonly #hash: Hash;
  readonly #every: number;
  readonly #stride: number;
  #lastRow = new Uint32Array(0);
  #lastCycle = -1;
  #isLeft = false;

  constructor(
    path: string,
    { form, mark, ...choice }: RecordedResponseOptions,
    { layout }: Design,
    saved: SavedResponse | undefined,
  ) {
    const Form = form === 'packed' ? PackedResponse : ResponseTable;
    this.#form = new Form(layout, choice);
    this.#every = choice.every ?? 1;
    this.#stride = rowStride(layout.outputs, layout.threeValued);
    this.#hash = createHash('sha256');
    this.#file = new WholeFile(path, mark, saved?.bytes);
    if (saved === undefined) this.#put(this.#form.header());
    else this.#goOn(path, mark, saved);
  }

  take({ firstCycle, cycles, rows }: OutletBlock): undefined {
    for (const piece of this.#form.rows({ firstCycle, cycles, rows })) this.#put(piece);
    const last = firstCycle + cycles - 1;
    const written = last - (last % this.#every);
    if (cycles === 0 || written < firstCycle) return;
    const at = (written - firstCycle) * this.#stride;
    this.#lastRow = rows.slice(at, at + this.#stride);
    this.#lastCycle = written;
  }

  save(): SavedResponse {
    return {
      kind: 'response',
      bytes: this.#file.length,
      sha256: this.#hash.copy().digest('hex'),
      lastRow: this.#lastRow,
      lastCycle: this.#lastCycle,
    };
  }

  finish({ stopped }: RunEnd): Findings {
    this.#isLeft = stopped?.reason === INTERRUPTED;
    return {};
  }

  keep(): void {
    if (this.#isLeft) this.#file.leave();
    else this.#file.finish();
  }

  // What a run leaves that fails is needed to go on: nothing is removed.
  discard(): void {
    this.#file.leave();
  }

  #goOn(path: string, mark: string, saved: SavedResponse): void {
    const target = existsSync(path) ? realpathSync(path) : path;
    eachPiece(partialPath(target, mark), saved.bytes, (piece) => this.#hash.update(piece));
    this.#lastRow = Uint32Array.from(saved.lastRow);
    this.#lastCycle = saved.lastCycle;
    if (saved.lastCycle < 0) return;
    // So that the form knows the row written last, where it leaves out rows that are the same.
    const row = { firstCycle: saved.lastCycle, cycles: 1, rows: this.#lastRow };
    for (const _ of this.#form.rows(row));
  }

  #put(piece: Uint8Array): void {
    this.#file.put(piece);
    this.#hash.update(piece);
  }
}

/** Hash of the first bytes of a file; undefined where it is shorter. */
function prefixHash(path: string, bytes: number): string | undefined {
  const hash = createHash('sha256');
  return eachPiece(path, bytes, (piece) => hash.update(piece)) ? hash.digest('hex') : undefined;
}

function eachPiece(path: string, bytes: number, take: (piece: Uint8Array) => void): boolean {
  const file = openSync(path, 'r');
  try {
    const buffer = Buffer.alloc(1 << 18);
    for (let done = 0; done < bytes; ) {
      const read = readSync(file, buffer, 0, Math.min(buffer.length, bytes - done), done);
      if (read === 0) return false;
      take(buffer.subarray(0, read));
      done += read;
    }
    return true;
  } finally {
    closeSync(file);
  }
}
