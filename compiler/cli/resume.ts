import { existsSync } from 'node:fs';
import { resolve } from 'node:path';
import { Command } from 'commander';
import type { Design } from '../compile.js';
import { changedInputs } from '../record/inputs.js';
import { layoutHash } from '../record/manifest.js';
import { isIntact, type SavedResponse } from '../record/recordedResponse.js';
import { FolderFiles } from '../record/recordFiles.js';
import { RunRecord } from '../record/runRecord.js';
import { DamagedFile } from '../record/sealedText.js';
import { figure } from '../report/figures.js';
import { shellWord } from '../report/shellText.js';
import type { RunStart } from '../run/runRecorder.js';
import { exitStatus, summaryText } from '../run/runSummary.js';
import type { ReadFile } from './netlists.js';
import { inputsOf, lock, markOf, type RecordSession, session } from './run/recordOptions.js';
import { type RunOptions, run, runCommand } from './run.js';
import { UsageError } from './usageError.js';

/** The verb `resume`: goes on with a recorded run that was stopped. */
export function resumeCommand(): Command {
  return new Command('resume')
    .description('Goes on with a recorded run from its newest sound checkpoint.')
    .argument('<dir>', 'the folder given to `run --record`')
    .option('--json', 'print the summary as JSON')
    .addHelpText('after', HELP)
    .action((dir: string, options: { readonly json?: true }) => resume(dir, options));
}

const HELP = `
The run comes to the same end as if it had not been stopped: signature, departures and
response. The netlists and tables must be as they were. A response file is cut to where
the checkpoint was made and gone on with; where what was written of it is gone, the run
goes back as far as it must. A run that a condition has stopped goes on to the next time
it is met, with --stop-after counted anew.

Exit status: 0 done and as expected, 1 done and a departure found, stopped by a condition
or interrupted again, 2 the record or an input is not as it was, or a cycle has no result.

Examples:
  clockstride run lock.v --random 1 --cycles 100_000_000_000 --signature --record lock.record
  ^C
  clockstride resume lock.record
  clockstride resume lock.record --json`;

async function resume(dir: string, { json }: { readonly json?: true }): Promise<void> {
  const { record, files, options } = await recordedRun(dir);
  const result = await record.result().catch((error) => refuse(error, dir));
  const { cycle: past, condition } = result?.stopped ?? {};
  const goesPast = condition !== undefined && past !== undefined;
  const wanted: RunOptions = {
    ...options,
    ...(json && { json }),
    ...(goesPast && { stopPast: past }),
  };
  if (result !== undefined && !goesPast) {
    const over = `the run was over already; \`clockstride revisit ${shellWord(dir)}\` shows its cycles`;
    const summary = { ...result, notes: [...result.notes, over] };
    const text = wanted.json
      ? JSON.stringify(summary, null, 2)
      : summaryText(summary, wanted.expect);
    process.stdout.write(`${text}\n`);
    process.exitCode = exitStatus(summary);
    return;
  }
  const unlock = lock(record.path);
  await run(files, wanted, async (design, netlists): Promise<RecordSession> => {
    await refuseChanges(record, design, netlists, wanted);
    const from = await newestWhole(record, wanted);
    const stop = goesPast ? `, past its stop at cycle ${figure(past)}` : '';
    process.stderr.write(`${dir}: goes on at cycle ${figure(from?.cycle ?? 0)}${stop}\n`);
    if (goesPast) await record.reopen();
    return session(record, from, unlock);
  }).finally(unlock);
}

/** A recorded run: the record, and what the command line of the run said. */
export interface RecordedRun {
  readonly record: RunRecord;
  readonly files: string[];
  readonly options: RunOptions;
}

/**
 * Opens a record and goes to the folder in which its run was started. Throws UsageError where there
 * is no record, and where it is damaged.
 */
export async function recordedRun(dir: string): Promise<RecordedRun> {
  const path = resolve(dir);
  if (!existsSync(path)) throw new UsageError(`error: there is no folder ${dir}`);
  if (!existsSync(resolve(path, 'manifest.json'))) {
    throw new UsageError(`error: ${dir} is no record: it has no manifest.json`);
  }
  const record = await RunRecord.open(new FolderFiles(path, dir)).catch((error) =>
    refuse(error, dir),
  );
  const { command, directory } = record.manifest;
  if (!existsSync(directory)) {
    throw new UsageError(`error: ${dir}: the run was started in ${directory}, which is gone`);
  }
  process.chdir(directory);
  let said: { files: string[]; options: RunOptions } | undefined;
  const parser = runCommand(async (files, options) => {
    said = { files, options };
  });
  await parser.exitOverride().parseAsync([...command], { from: 'user' });
  return { record, ...said! };
}

/** Throws UsageError where the files that a recorded run depends on are not as they were. */
export async function refuseChanges(
  { path, manifest }: RunRecord,
  design: Design,
  netlists: readonly ReadFile[],
  options: RunOptions,
): Promise<void> {
  const changes = changedInputs(manifest.inputs, await inputsOf(netlists, options));
  if (changes.length > 0) {
    throw new UsageError(
      `error: ${changes.join('\n')}\nthe record in ${path} is of a run with the files as they were`,
    );
  }
  if (layoutHash(design.layout) === manifest.layout) return;
  throw new UsageError(
    `error: ${path} was made by version ${manifest.version}, which names state elements otherwise`,
  );
}

/** Says on stderr that a file of a record is not as it was written. */
export const warnOfDamage =
  (dir: string) =>
  (problem: DamagedFile): void => {
    process.stderr.write(`warning: ${dir}/${problem.message}; an earlier checkpoint is taken\n`);
  };

// The newest checkpoint up to which the response is there too; without one, all can be made again.
async function newestWhole(
  record: RunRecord,
  { response }: RunOptions,
): Promise<RunStart | undefined> {
  let isTold = false;
  for await (const start of record.before(Number.POSITIVE_INFINITY, warnOfDamage(record.path))) {
    const saved = start.outlets.find(isResponse);
    if (saved === undefined || response === undefined) return start;
    if (isIntact(response, markOf(record), saved)) return start;
    if (!isTold) {
      const text = `what was written of ${response} is not there as it was; going back`;
      process.stderr.write(`warning: ${text}\n`);
    }
    isTold = true;
  }
  return undefined;
}

const isResponse = (saved: unknown): saved is SavedResponse =>
  typeof saved === 'object' && saved !== null && (saved as SavedResponse).kind === 'response';

/** Throws UsageError for what is wrong with a record, and anything else as it is. */
export function refuse(error: unknown, dir: string): never {
  if (error instanceof DamagedFile || error instanceof RangeError) {
    throw new UsageError(`error: ${dir}/${error.message}`);
  }
  throw error;
}
