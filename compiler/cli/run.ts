import { Command, Option } from 'commander';
import { RunFault } from '../../runtime/engine.js';
import { STANDARD } from '../../runtime/node/index.js';
import { isBackground, openCompiler } from '../background/compileThread.js';
import { ModelCache } from '../cache/modelCache.js';
import { type PowerUp, powerUpModes } from '../circuit/powerUp.js';
import { openStarts } from '../circuit/startingRegisters.js';
import type { Design } from '../compile.js';
import { type EngineName, engineNames } from '../engines.js';
import { CannotGoOn } from '../run/outlets/outlets.js';
import { runDesign } from '../run/runDesign.js';
import { isShort } from '../run/runEngine.js';
import { exitStatus, summaryText } from '../run/runSummary.js';
import { addCacheOption, type CacheOptions, userCache } from './cacheOption.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions, type ReadFile } from './netlists.js';
import { seedArgument } from './numbers.js';
import { printDiagnostics } from './printDiagnostics.js';
import {
  type ActivityOptions,
  activityOutlets,
  addActivityOptions,
} from './run/activityOptions.js';
import {
  addExpectationOptions,
  type ExpectationOptions,
  expectationName,
  expectationOutlets,
} from './run/expectationOptions.js';
import { refuseOutputs } from './run/outputFiles.js';
import { addPeriodOptions, courseOf, type PeriodOptions } from './run/periodOptions.js';
import {
  addRecordOptions,
  type RecordOptions,
  type RecordSession,
  startRecord,
} from './run/recordOptions.js';
import {
  addResponseOptions,
  type ResponseOptions,
  responseOutlets,
} from './run/responseOptions.js';
import { addStatesOptions, type StatesOptions, statesOutlets } from './run/statesOptions.js';
import { addStimulusOptions, type StimulusOptions } from './run/stimulusOptions.js';
import { addStopOptions, type StopOptions, stopsOf } from './run/stopOptions.js';
import {
  addWaveOptions,
  addWindowOptions,
  shownDesign,
  type WaveOptions,
  waveOutlets,
} from './run/waveOptions.js';
import { UsageError } from './usageError.js';

/*
 * Options come in groups, one file each in `run/`, that add them to the command and turn them into
 * a stimulus or into outlets; see `compiler/run/outlets/outlet.ts`. A new group is named once in
 * `RunOptions`, once in `runCommand`, and its outlets once in `run`, those that judge before those
 * that write.
 */

/** What the command line of a run says. */
export interface RunOptions
  extends NetlistOptions,
    ClockOptions,
    CacheOptions,
    StimulusOptions,
    PeriodOptions,
    StopOptions,
    WaveOptions,
    ActivityOptions,
    StatesOptions,
    RecordOptions,
    ResponseOptions,
    ExpectationOptions {
  readonly powerUp?: PowerUp;
  readonly seed: bigint;
  readonly engine: EngineName;
  readonly json?: true;
}

/** The verb `run`: runs cycles of a netlist. `action` is given what the command line says. */
export function runCommand(
  action: (files: string[], options: RunOptions) => Promise<void> = run,
): Command {
  const command = addClockOption(addNetlistOptions(new Command('run'))).description(
    'Runs cycles of a netlist and writes, compares or signs the response.',
  );
  addStimulusOptions(command);
  addPeriodOptions(command);
  addStopOptions(command);
  addResponseOptions(command);
  addExpectationOptions(command);
  addWindowOptions(addWaveOptions(command), false);
  addActivityOptions(command);
  addStatesOptions(command);
  addRecordOptions(command);
  addCacheOption(command);
  return command
    .addOption(
      new Option(
        '--power-up <how>',
        'how registers start that the netlist gives no value (default: zero)',
      ).choices(powerUpModes),
    )
    .addOption(
      new Option('--seed <seed>', 'seed of random power-up')
        .argParser(seedArgument)
        .default(0n, '0'),
    )
    .addOption(new Option('--engine <name>', 'what runs it').choices(engineNames).default('wasm'))
    .option('--json', 'print the summary as JSON')
    .addHelpText('after', HELP)
    .action((files: string[], options: RunOptions) => action(files, options));
}

const HELP = `
A stimulus table names input ports in its header; an empty field holds the value
before, a column @cycles tells how long a row lasts. The clock ticks by itself and has
no column. An expectation table has any of the columns of a response. Other forms, with
examples of modules, are in the README under Streams.

Exit status: 0 done and as expected, 1 done and a departure found, stopped by a condition
or interrupted, 2 an input or the request is wrong, or a cycle has no result.

Examples:
  clockstride run lock.v --stimulus boats.csv --cycles 2000000 --expect lights.csv
  clockstride run lock.v --stimulus recorded.vcd.gz --response - --changes | head
  clockstride run lock.v --random 7 --weight reset=0.001 --cycles 1000000 \\
    --expect-netlist mapped.v cells.lib
  clockstride run lock.v --stimulus boats.csv --cycles 300 --picture lock.svg
  clockstride run lock.v --random 1 --cycles 100_000_000_000 --record lock.record
  clockstride run lock.v --random 1 --weight reset=0.001 \\
    --stop-when 'timer == 12 && state[3]' --stop-after 1000
  clockstride run counter.v --find-period`;

/** Runs what a command line says. `resumed` opens the record of a run that is gone on with. */
export async function run(
  files: string[],
  request: RunOptions,
  resumed?: (design: Design, netlists: readonly ReadFile[]) => Promise<RecordSession>,
): Promise<void> {
  refuseSharing(request);
  const powerUp = request.powerUp ?? 'zero';
  const emitter = request.engine === 'wasm' ? openCompiler() : undefined;
  const cache = userCache(request);
  const loaded = await loadCircuit(files, request, {
    cache: cache?.netlists,
    // The compiler takes a while to get ready: it does so while the netlist is read.
    onReading: () => {
      if (emitter && isBackground(emitter) && !isShort(request.cycles)) emitter.prepare();
    },
  });
  const { circuit, found, files: netlists, id } = loaded;
  const whole = timedDesign(circuit, request, { threeValued: powerUp === 'unknown' });
  const { design, options, key } = shownDesign(whole, request);
  // Standard output has one use: what is said goes elsewhere where the response takes it.
  const talk = options.response === STANDARD ? process.stderr : process.stdout;
  const tell = (text: string) => talk.write(options.json ? '' : `${text}\n`);
  const judges = await expectationOutlets(options, {
    ...{ design, engine: options.engine, powerUp, seed: options.seed, onDeparture: tell },
    ...(emitter && { emitter }),
  });
  const waves = [
    ...waveOutlets(design, options),
    ...activityOutlets(design, options, emitter),
    ...statesOutlets(design, options),
  ];
  const stops = stopsOf(design, options, options.record);
  const interrupt = new AbortController();
  process.once('SIGINT', () => {
    interrupt.abort();
    // Or the run would wait for a row that may never come.
    if (options.stimulus === STANDARD || options.expect === STANDARD) process.stdin.destroy();
  });
  // What is wrong with the rest of the request must show before there is a record.
  responseOutlets(options, design, options.record);
  const session = await recordOf(options, design, netlists, resumed);
  const writers = responseOutlets(options, design, session?.mark);
  const { stimulus, notes, outlets, cycles } = await courseOf(design, options, {
    ...(session?.from && { from: session.from.cycle }),
    interrupt: interrupt.signal,
  });
  const summary = await runDesign(stops.design, {
    stimulus,
    ...(cycles !== undefined && { cycles }),
    ...(session && { recorder: session.recorder }),
    ...(session?.from && { from: session.from }),
    engine: options.engine,
    powerUp,
    seed: options.seed,
    outlets: [...outlets, ...stops.outlets, ...judges, ...waves, ...writers],
    notes,
    interrupt: interrupt.signal,
    // Not before: where a table is wrong, that is all there is to say.
    onStart: () => {
      printDiagnostics(found);
      if (options.powerUp === undefined) warnOfStart(design);
    },
    ...(emitter && { emitter }),
    ...(cache && id !== undefined && { models: new ModelCache(cache.store, id + key + stops.key) }),
  })
    .catch((error) => failed(error, session, options.response))
    // What it still compiles is not worth waiting for.
    .finally(() => emitter?.close());
  session?.close();
  const text = options.json
    ? JSON.stringify(summary, null, 2)
    : summaryText(summary, expectationName(options));
  talk.write(`${text}\n`);
  process.exitCode = exitStatus(summary);
  await cache?.store.flush();
}

// A cycle without result is worth a look at what led there; the record of a bad request is not.
async function failed(
  error: unknown,
  session: RecordSession | undefined,
  response: string | undefined,
): Promise<never> {
  session?.close();
  if (!(error instanceof RunFault)) await session?.abandon(response);
  if (error instanceof CannotGoOn) throw new UsageError(`error: --record: ${error.message}`);
  throw error;
}

function recordOf(
  options: RunOptions,
  design: Design,
  netlists: readonly ReadFile[],
  resumed: Parameters<typeof run>[2],
): Promise<RecordSession> | undefined {
  if (resumed !== undefined) return resumed(design, netlists);
  if (options.record === undefined) return undefined;
  return startRecord(options.record, design, netlists, options);
}

function refuseSharing(options: RunOptions): void {
  const { json, response, stimulus, expect } = options;
  refuseOutputs(options);
  if (json && response === STANDARD) {
    throw new UsageError('error: --json and --response - both want standard output');
  }
  if (stimulus === STANDARD && expect === STANDARD) {
    throw new UsageError('error: --stimulus - and --expect - both want standard input');
  }
}

function warnOfStart(design: Design): void {
  const { length } = openStarts(design);
  if (length === 0) return;
  process.stderr.write(
    `warning: ${length} of ${design.circuit.registers.count} registers have neither an initial ` +
      'value nor a set or reset; they start at 0. Choose with --power-up. [register-no-start]\n',
  );
}
