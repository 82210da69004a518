import type { RunStart } from '../run/runRecorder.js';
import type { RunSummary } from '../run/runSummary.js';
import { type CheckpointContext, decodeCheckpoint, encodeCheckpoint } from './checkpoint.js';
import { LOCK } from './lock.js';
import { decodeManifest, encodeManifest, MANIFEST, type Manifest, recordId } from './manifest.js';
import { isPartial, type RecordFiles } from './recordFiles.js';
import { DamagedFile, sealed, unsealed } from './sealedText.js';
import { type Kept, surplus } from './thinning.js';

/** Name of the file with the summary of a run that is over. */
const RESULT = 'result.json';

const CHECKPOINT = /^checkpoint-(\d{16})\.bin$/;

interface Listed extends Kept {
  readonly name: string;
}

/** A record of a run: its manifest, its checkpoints, and when it is over its result. */
export class RunRecord {
  readonly manifest: Manifest;
  readonly #files: RecordFiles;
  readonly #context: CheckpointContext;
  /** In ascending order of cycles. */
  readonly #checkpoints: Listed[] = [];

  private constructor(files: RecordFiles, manifest: Manifest) {
    this.#files = files;
    this.manifest = manifest;
    this.#context = { ...manifest, record: recordId(manifest) };
  }

  /** Starts a record, with nothing but its manifest. */
  static async create(files: RecordFiles, manifest: Manifest): Promise<RunRecord> {
    const record = new RunRecord(files, manifest);
    await files.write(MANIFEST, encodeManifest(manifest));
    return record;
  }

  /**
   * Opens a record. Throws `DamagedFile` for a manifest that is not as it was written, and what the
   * file system throws where there is none.
   */
  static async open(files: RecordFiles): Promise<RunRecord> {
    const record = new RunRecord(files, decodeManifest(await files.read(MANIFEST)));
    for (const name of await files.names()) {
      const [, digits] = CHECKPOINT.exec(name) ?? [];
      if (digits === undefined) continue;
      const bytes = await readIfThere(files, name);
      if (bytes === undefined) continue;
      record.#checkpoints.push({ name, cycle: Number(digits), bytes: bytes.length });
    }
    return record;
  }

  /** Folder of the record. */
  get path(): string {
    return this.#files.path;
  }

  /** The same as it was named. */
  get shown(): string {
    return this.#files.shown ?? this.#files.path;
  }

  /** What tells the record from all others. */
  get id(): string {
    return this.#context.record;
  }

  /** Cycles of the checkpoints, ascending. */
  get cycles(): number[] {
    return this.#checkpoints.map(({ cycle }) => cycle);
  }

  /** Adds a checkpoint, and lets go of older ones that are too many. Throws what the files throw. */
  async add(start: RunStart): Promise<void> {
    const bytes = await encodeCheckpoint(start, this.#context);
    const name = `checkpoint-${String(start.cycle).padStart(16, '0')}.bin`;
    await this.#files.write(name, bytes);
    const same = this.#checkpoints.findIndex(({ cycle }) => cycle >= start.cycle);
    // One of the same cycle is replaced; later ones are of a run that was resumed before them.
    const later = same < 0 ? [] : this.#checkpoints.splice(same);
    this.#checkpoints.push({ name, cycle: start.cycle, bytes: bytes.length });
    const gone = [...later.filter((each) => each.name !== name), ...surplus(this.#checkpoints)];
    for (const each of gone) await this.#remove(each);
  }

  /**
   * The sound checkpoints at or before a cycle, the newest first; `onDamage` is told of those that
   * are not as they were written.
   */
  async *before(
    cycle: number,
    onDamage: (problem: DamagedFile) => void = () => undefined,
  ): AsyncGenerator<RunStart, void, undefined> {
    for (const { name, cycle: own } of this.#checkpoints.toReversed()) {
      if (own > cycle) continue;
      try {
        const bytes = await readIfThere(this.#files, name);
        if (bytes === undefined) continue;
        const start = await decodeCheckpoint(name, bytes, this.#context);
        if (start.cycle !== own) throw new DamagedFile(name, `it is of cycle ${start.cycle}`);
        yield start;
      } catch (error) {
        if (!(error instanceof DamagedFile)) throw error;
        onDamage(error);
      }
    }
  }

  /** Removes all files of the record. */
  async remove(): Promise<void> {
    for (const name of await this.#files.names()) {
      if (name === MANIFEST || CHECKPOINT.test(name) || isPartial(name)) {
        await this.#files.remove(name);
      }
    }
  }

  /** Removes what a killed process left half written. */
  async clear(): Promise<void> {
    for (const name of await this.#files.names())
      if (isPartial(name)) await this.#files.remove(name);
  }

  /** Writes what the run came to. */
  async close(summary: RunSummary): Promise<void> {
    await this.#files.write(RESULT, sealed({ record: this.id, ...summary }));
  }

  /** Forgets what the run came to: it goes on. */
  async reopen(): Promise<void> {
    await this.#files.remove(RESULT);
  }

  /** What the run came to; undefined while it is not over. Throws `DamagedFile`. */
  async result(): Promise<RunSummary | undefined> {
    if (!(await this.#files.names()).includes(RESULT)) return undefined;
    const read = unsealed(RESULT, await this.#files.read(RESULT)) as RunSummary & {
      record: string;
    };
    const { record, ...summary } = read;
    if (record !== this.id) throw new DamagedFile(RESULT, 'it belongs to another record');
    return summary;
  }

  /**
   * Looks at every file. Returns what is not as it was written, and how many files there are that
   * no record has.
   */
  async check(): Promise<{ damaged: DamagedFile[]; strange: string[] }> {
    const damaged: DamagedFile[] = [];
    for await (const _ of this.before(Number.POSITIVE_INFINITY, (each) => damaged.push(each)));
    await this.result().catch((error) => {
      if (!(error instanceof DamagedFile)) throw error;
      damaged.push(error);
    });
    const strange = (await this.#files.names()).filter(
      (name) => ![MANIFEST, RESULT, LOCK].includes(name) && !CHECKPOINT.test(name),
    );
    return { damaged, strange };
  }

  async #remove(checkpoint: Listed): Promise<void> {
    await this.#files.remove(checkpoint.name);
    const index = this.#checkpoints.indexOf(checkpoint);
    if (index >= 0) this.#checkpoints.splice(index, 1);
  }
}

// A run that is at work on the record may have thinned it out meanwhile.
async function readIfThere(files: RecordFiles, name: string): Promise<Uint8Array | undefined> {
  try {
    return await files.read(name);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return undefined;
    throw error;
  }
}
