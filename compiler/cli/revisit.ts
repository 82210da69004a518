import { resolve } from 'node:path';
import { Command, Option } from 'commander';
import { startEmitter } from '../emit/emitter.js';
import { type EngineName, engineNames } from '../engines.js';
import type { RunRecord } from '../record/runRecord.js';
import { counted, figure } from '../report/figures.js';
import { type Revisited, revisitDesign } from '../revisit/revisitDesign.js';
import type { RunStart } from '../run/runRecorder.js';
import type { RunSummary } from '../run/runSummary.js';
import { writeWave } from '../waveform/writeWave.js';
import { timedDesign } from './clockOption.js';
import { loadCircuit } from './netlists.js';
import { recordedRun, refuse, refuseChanges, warnOfDamage } from './resume.js';
import { refuseOutputs } from './run/outputFiles.js';
import { courseOf } from './run/periodOptions.js';
import {
  addWaveOptions,
  addWindowOptions,
  type ChosenWave,
  shownDesign,
  type WaveOptions,
  wavesWanted,
  windowOf,
} from './run/waveOptions.js';
import { UsageError } from './usageError.js';

interface RevisitOptions extends WaveOptions {
  readonly from: number;
  readonly to: number;
  readonly engine?: EngineName;
  readonly json?: true;
}

/** The verb `revisit`: shows any cycles of a recorded run with every net in sight. */
export function revisitCommand(): Command {
  const command = new Command('revisit')
    .description('Runs some cycles of a recorded run again, with every net in sight.')
    .argument('<dir>', 'the folder given to `run --record`');
  addWaveOptions(addWindowOptions(command, true));
  return command
    .addOption(
      new Option(
        '--engine <name>',
        'what runs the cycles; chosen by their number unless given',
      ).choices(engineNames),
    )
    .option('--json', 'print what was done as JSON')
    .addHelpText('after', HELP)
    .action((dir: string, options: RevisitOptions) => revisit(dir, options));
}

const HELP = `
The run goes again from the nearest checkpoint before the window. A run of which the
period is known (--find-period) can be revisited at any later cycle. Values are those
which nets have when the outputs are sampled, x included where the run had three values.

Exit status: 0 the window is written, 1 it ends early at a cycle without result or was
interrupted, 2 the record, an input or the request is wrong.

Examples:
  clockstride revisit lock.record --from 1_000_000 --to 1_000_040 --picture lock.svg
  clockstride revisit soc.record --from 812_000 --to 812_999 --nets 'cpu.*' '**.fifo.count' \\
    --waveform cpu.vcd --table cpu.csv`;

async function revisit(dir: string, options: RevisitOptions): Promise<void> {
  const window = windowOf(options);
  if ((options.waveform ?? options.table ?? options.picture) === undefined) {
    throw new UsageError('error: say where to: --waveform, --table or --picture FILE');
  }
  refuseOutputs(options);
  // Paths are meant where the command was given, not where the run was.
  const here = pathsOf(options);
  const given = new Map(
    (['waveform', 'table', 'picture'] as const).map((form) => [here[form], options[form] ?? '']),
  );
  const { record, files, options: run } = await recordedRun(dir);
  const result = await record.result().catch((error) => refuse(error, dir));
  const shift = shiftOf(dir, window.from, result);
  const emitter = startEmitter();
  try {
    const { circuit, files: netlists } = await loadCircuit(files, run);
    const powerUp = run.powerUp ?? 'zero';
    const whole = timedDesign(circuit, run, { threeValued: powerUp === 'unknown' });
    await refuseChanges(record, whole, netlists, run);
    const { design, options: shownOptions } = shownDesign(whole, { ...options, ...here });
    const waves = wavesWanted(design, shownOptions);
    const start = await nearest(record, window.from - shift);
    const course = await courseOf(design, run, { from: start.cycle });
    const interrupt = new AbortController();
    process.once('SIGINT', () => interrupt.abort());
    const shown = { from: window.from - shift, to: window.to - shift };
    const seen = await revisitDesign(design, {
      ...{ start, ...shown, powerUp, seed: run.seed, interrupt: interrupt.signal, emitter },
      engine: options.engine ?? 'wasm',
      ...(course.cycles !== undefined && { cycles: course.cycles }),
      stimulus: async (from) => (await courseOf(design, run, { from })).stimulus,
      outlets: () => waves.map(({ path, form, list }) => writeWave(path, form, list, shown, shift)),
    });
    const isInterrupted = interrupt.signal.aborted && seen.shown <= window.to - window.from;
    const moment = { start: start.cycle + shift, isInterrupted };
    const nameOf = (path: string): string => given.get(path) ?? path;
    report(options, seen, { dir, ...moment, waves, nameOf, circuit: circuit.name });
  } finally {
    await emitter.close();
  }
}

function pathsOf({ waveform, table, picture }: WaveOptions): WaveOptions {
  return {
    ...(waveform !== undefined && { waveform: resolve(waveform) }),
    ...(table !== undefined && { table: resolve(table) }),
    ...(picture !== undefined && { picture: resolve(picture) }),
  };
}

/** Cycles, whole periods, by which a window comes before itself, so that it lies in the run. */
function shiftOf(dir: string, from: number, result: RunSummary | undefined): number {
  if (result === undefined || from < result.cycles) return 0;
  const { repetition, cycles } = result;
  if (repetition === undefined) {
    throw new UsageError(
      `error: ${dir}: the run has ${counted(cycles, 'cycle')}, and its period is not known ` +
        '(--find-period); --from must be less',
    );
  }
  return Math.floor((from - repetition.leadIn) / repetition.period) * repetition.period;
}

async function nearest(record: RunRecord, cycle: number): Promise<RunStart> {
  for await (const start of record.before(cycle, warnOfDamage(record.path))) return start;
  throw new UsageError(`error: ${record.path} has no sound checkpoint before cycle ${cycle}`);
}

interface Told {
  readonly dir: string;
  readonly circuit: string;
  /** The cycle of the checkpoint, as the window counts. */
  readonly start: number;
  /** Whether the user has ended it before its last cycle. */
  readonly isInterrupted: boolean;
  readonly waves: readonly ChosenWave[];
  /** What the user has called a file. */
  readonly nameOf: (path: string) => string;
}

function report(options: RevisitOptions, seen: Revisited, told: Told): void {
  const { from } = options;
  const { shown, engine, fault } = seen;
  if (fault !== undefined || told.isInterrupted) process.exitCode = 1;
  if (shown === 0) {
    if (!told.isInterrupted) {
      throw new UsageError(`error: ${told.dir}: the run ends before cycle ${figure(from)}`);
    }
    process.stderr.write(`interrupted before cycle ${figure(from)}; nothing is written\n`);
    return;
  }
  if (options.json) {
    const waves = told.waves.map(({ path, list }) => ({
      file: told.nameOf(path),
      signals: list.count,
    }));
    const faults = fault && { fault: { cycle: from + shown, message: fault.message } };
    const { start: checkpoint } = told;
    const interrupted = told.isInterrupted && { interrupted: true };
    const to = from + shown - 1;
    const summary = { from, to, checkpoint, engine, waves, ...faults, ...interrupted };
    process.stdout.write(`${JSON.stringify(summary, null, 2)}\n`);
    return;
  }
  const last = figure(from + shown - 1);
  const lines = told.waves.map(
    ({ path, list }) => `${told.nameOf(path)}: ${counted(list.count, 'signal')} of ${told.circuit}`,
  );
  lines.push(
    `cycles ${figure(from)} to ${last}, from the checkpoint at cycle ${figure(told.start)} ` +
      `(engine ${engine})`,
  );
  if (fault !== undefined) {
    lines.push(`cycle ${figure(from + shown)} has no result: ${fault.message}`);
  } else if (told.isInterrupted) lines.push('interrupted there');
  else if (from + shown - 1 < options.to) lines.push('the run ends there');
  process.stdout.write(`${lines.join('\n')}\n`);
}
