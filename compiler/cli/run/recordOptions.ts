import { existsSync, statSync } from 'node:fs';
import { rmdir } from 'node:fs/promises';
import { resolve } from 'node:path';
import { type Command, Option } from 'commander';
import { STANDARD } from '../../../runtime/node/index.js';
import type { Design } from '../../compile.js';
import { hashedInput, inputOf } from '../../record/inputs.js';
import { LOCK, lockRecord, RecordBusy } from '../../record/lock.js';
import { manifestOf, type RecordedInput } from '../../record/manifest.js';
import { forget } from '../../record/recordedResponse.js';
import { Recorder } from '../../record/recorder.js';
import { FolderFiles, isPartial } from '../../record/recordFiles.js';
import { RunRecord } from '../../record/runRecord.js';
import { shellWord } from '../../report/shellText.js';
import type { RunStart } from '../../run/runRecorder.js';
import type { ReadFile } from '../netlists.js';
import { UsageError } from '../usageError.js';
import { version } from '../version.js';

/** Where a run is recorded. */
export interface RecordOptions {
  readonly record?: string;
}

/** Adds the option that records a run. */
export function addRecordOptions(command: Command): Command {
  return command.addOption(
    new Option(
      '--record <dir>',
      'keep a record, from which the run can be resumed, and any of its cycles revisited',
    ).conflicts(['waveform', 'table', 'picture']),
  );
}

/** A run that is recorded, new or gone on with. Close it when the run is over. */
export interface RecordSession {
  readonly recorder: Recorder;
  /** Tells the files of this run from those of others. */
  readonly mark: string;
  /** Where the run goes on; undefined at its start. */
  readonly from: RunStart | undefined;
  /** Removes a record that has come to nothing, and what was written of the response. */
  abandon(response: string | undefined): Promise<void>;
  close(): void;
}

/** What a recorded run reads beside netlists. */
export interface RecordedFiles {
  readonly stimulus?: string;
  readonly expect?: string;
}

/** All files that a run depends on, with their hashes. Throws UsageError for what is no file. */
export async function inputsOf(
  netlists: readonly ReadFile[],
  { stimulus, expect }: RecordedFiles,
): Promise<RecordedInput[]> {
  const known = new Map(netlists.map((file) => [file.path, file]));
  const inputs = [...known.values()].map(({ path, bytes }) => inputOf('netlist', path, bytes));
  if (stimulus !== undefined) inputs.push(await fileInput('stimulus', stimulus));
  if (expect !== undefined) inputs.push(await fileInput('expectation', expect));
  return inputs;
}

async function fileInput(role: string, path: string): Promise<RecordedInput> {
  if (path === STANDARD || (existsSync(path) && !statSync(path).isFile())) {
    throw new UsageError(`error: --record: the ${role} ${path} is no file that can be read again`);
  }
  return hashedInput(role, path);
}

/**
 * Starts the record of a run. Throws UsageError where its folder holds something already and where
 * the run cannot be recorded.
 */
export async function startRecord(
  folder: string,
  design: Design,
  netlists: readonly ReadFile[],
  recorded: RecordedFiles,
): Promise<RecordSession> {
  const inputs = await inputsOf(netlists, recorded);
  const files = new FolderFiles(folder);
  const isNew = await files.make();
  // What a process left that was killed before it began is nothing.
  const names = (await files.names()).filter((name) => name !== LOCK && !isPartial(name));
  if (names.includes('manifest.json')) {
    throw new UsageError(
      `error: ${folder} holds the record of a run already: go on with it by ` +
        `\`clockstride resume ${shellWord(folder)}\`, or remove it`,
    );
  }
  if (names.length > 0) throw new UsageError(`error: --record: ${folder} is not empty`);
  const close = lock(folder);
  // The words of the command line behind the verb.
  const command = process.argv.slice(3);
  const origin = { version: version(), command, directory: resolve('.'), inputs };
  try {
    const record = await RunRecord.create(files, manifestOf(design, origin));
    return session(record, undefined, close, isNew);
  } catch (error) {
    close();
    if (isNew) await removeEmpty(folder);
    throw error;
  }
}

/** Goes on with the record of a run, from a moment of it; `isNew` where its folder was made for it. */
export function session(
  record: RunRecord,
  from: RunStart | undefined,
  close: () => void,
  isNew = false,
): RecordSession {
  const recorder = new Recorder(record, (text) => process.stderr.write(`${text}\n`));
  const mark = markOf(record);
  const abandon = async (response: string | undefined): Promise<void> => {
    await recorder.settled();
    if (from !== undefined || recorder.last > 0) return;
    await record.remove();
    if (isNew) await removeEmpty(record.path);
    if (response !== undefined) forget(response, mark);
  };
  return { recorder, mark, from, abandon, close };
}

// What else stands there by now is not ours to remove.
const removeEmpty = (folder: string): Promise<void> => rmdir(folder).catch(() => undefined);

/** Tells the hidden files of a record from those of others. */
export const markOf = ({ id }: RunRecord): string => id.slice(0, 12);

/** Keeps other processes off a record. Throws UsageError where one is at work on it. */
export function lock(folder: string): () => void {
  try {
    return lockRecord(folder);
  } catch (error) {
    if (error instanceof RecordBusy) throw new UsageError(`error: ${folder}: ${error.message}`);
    throw error;
  }
}
