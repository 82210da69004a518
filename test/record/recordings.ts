import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Design } from '../../compiler/compile.js';
import { manifestOf } from '../../compiler/record/manifest.js';
import { FolderFiles, type RecordFiles } from '../../compiler/record/recordFiles.js';
import { RunRecord } from '../../compiler/record/runRecord.js';
import type { OutletPlan } from '../../compiler/run/outlets/outlet.js';
import { type RunRequest, runDesign } from '../../compiler/run/runDesign.js';
import type { RunRecorder, RunStart } from '../../compiler/run/runRecorder.js';
import type { RunSummary } from '../../compiler/run/runSummary.js';
import { skipCycles } from '../../runtime/skipCycles.js';
import { randomStimulus } from '../../runtime/stream.js';

const root = mkdtempSync(join(tmpdir(), 'clockstride-records-'));

let made = 0;

/** A path that nothing stands at yet. */
export const freshPath = (): string => join(root, `${made++}`);

/** A record in a folder of its own, or in the files given. */
export async function freshRecord(design: Design, files?: RecordFiles): Promise<RunRecord> {
  const folder = new FolderFiles(freshPath());
  await folder.make();
  const origin = { version: '0.0.0', command: [], directory: '/', inputs: [] };
  return RunRecord.create(files ?? folder, manifestOf(design, origin));
}

/** What a test run is like. */
export interface TestRun {
  readonly design: Design;
  readonly cycles: number;
  readonly outlets: () => OutletPlan[];
  readonly engine?: RunRequest['engine'];
}

const SEED = 77;

/** Runs with random inputs, from a moment on if one is given, and recorded if a recorder is. */
export function play(
  { design, cycles, outlets, engine = 'bytecode' }: TestRun,
  { from, recorder }: { readonly from?: RunStart; readonly recorder?: RunRecorder } = {},
) {
  const stimulus = randomStimulus(design.layout, SEED, cycles);
  return runDesign(design, {
    stimulus: from === undefined ? stimulus : skipCycles(stimulus, from.cycle),
    ...{ engine, powerUp: design.layout.threeValued ? 'unknown' : 'random', seed: 5 },
    outlets: outlets(),
    ...(from && { from }),
    ...(recorder && { recorder }),
  });
}

/** Writes a checkpoint after every third block, whatever the time. */
export class BlockRecorder implements RunRecorder {
  readonly #record: RunRecord;
  #blocks = 0;
  #written: Promise<void> = Promise.resolve();

  constructor(record: RunRecord) {
    this.#record = record;
  }

  async begin(moment: () => RunStart): Promise<void> {
    await this.#record.add(moment());
  }

  after(moment: () => RunStart): void {
    if (++this.#blocks % 3 === 0) this.#add(moment());
  }

  async end(summary: RunSummary, last: RunStart | undefined): Promise<string[]> {
    if (last !== undefined) this.#add(last);
    await this.#written;
    await this.#record.close(summary);
    return [];
  }

  #add(moment: RunStart): void {
    this.#written = this.#written.then(() => this.#record.add(moment));
  }
}

/** All sound checkpoints of a record, the newest first. */
export async function momentsOf(record: RunRecord): Promise<RunStart[]> {
  const moments: RunStart[] = [];
  for await (const moment of record.before(Number.POSITIVE_INFINITY)) moments.push(moment);
  return moments;
}
