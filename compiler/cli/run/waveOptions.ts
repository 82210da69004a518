import { type Command, InvalidArgumentError, Option } from 'commander';
import type { Circuit } from '../../circuit/circuit.js';
import type { Design } from '../../compile.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { withMemoryWords } from '../../waveform/memoryWords.js';
import { MOST_SHOWN, pictureForm } from '../../waveform/picture/pictureForm.js';
import {
  portSignals,
  type SignalList,
  signalsOf,
  UnmatchedPattern,
} from '../../waveform/signalList.js';
import { tableForm } from '../../waveform/tableForm.js';
import { vcdForm } from '../../waveform/vcd/vcdForm.js';
import type { WaveForm, WaveWindow } from '../../waveform/wave.js';
import { writeWave } from '../../waveform/writeWave.js';
import { UsageError } from '../usageError.js';

/** The files that waves go to, and what they show. */
export interface WaveOptions {
  readonly waveform?: string;
  readonly table?: string;
  readonly picture?: string;
  readonly nets?: readonly string[];
  readonly from?: number;
  readonly to?: number;
}

/** What else looks at the chosen signals and cycles. */
interface ActivityFiles {
  readonly activity?: string;
  readonly activityPicture?: string;
}

/** Adds the options that ask for waves, but for the window. */
export function addWaveOptions(command: Command): Command {
  return command
    .option('--waveform <file>', 'write waves as a value change dump (IEEE 1364)')
    .option('--table <file>', 'write them as CSV, a row a cycle')
    .option('--picture <file>', 'draw them as a timing diagram, SVG')
    .option(
      '--nets <pattern...>',
      'the signals to show or count, by hierarchical name: * stands for anything within a level, ' +
        '** for any levels, and [7:4] at the end for a part, or [5] for a word of a memory; in a ' +
        'picture the ports unless given, else all',
    );
}

/** Adds the options of the window. */
export function addWindowOptions(command: Command, isNeeded: boolean): Command {
  const from = new Option('--from <cycle>', 'first cycle to show').argParser(cycleArgument);
  const to = new Option('--to <cycle>', 'last cycle to show').argParser(cycleArgument);
  return command
    .addOption(from.makeOptionMandatory(isNeeded))
    .addOption(to.makeOptionMandatory(isNeeded));
}

/** A file of waves, its form and what it shows. */
export interface ChosenWave {
  readonly path: string;
  readonly form: WaveForm;
  readonly list: SignalList;
}

/** The waves asked for. Throws UsageError for patterns that choose nothing, and for too many signals. */
export function wavesWanted(
  { circuit }: Design,
  options: WaveOptions & ActivityFiles,
): ChosenWave[] {
  const { waveform, table, picture, nets = [] } = options;
  const { activity, activityPicture } = options;
  const isAny = (waveform ?? table ?? picture) !== undefined;
  const isCounted = (activity ?? activityPicture) !== undefined;
  const stray = nets.length > 0 ? '--nets' : options.from !== undefined ? '--from' : '--to';
  const isStray = nets.length > 0 || (options.from ?? options.to) !== undefined;
  if (!isAny && !isCounted && isStray) {
    throw new UsageError(
      `error: ${stray} is for --waveform, --table, --picture or --activity FILE`,
    );
  }
  if (!isAny) return [];
  const chosen = chosenSignals(circuit, nets);
  const shown = nets.length === 0 ? portSignals(circuit) : chosen;
  if (picture !== undefined && shown.count > MOST_SHOWN.signals) {
    throw new UsageError(
      `error: --picture: ${shown.count} signals are too many to draw; choose at most ` +
        `${MOST_SHOWN.signals} with --nets`,
    );
  }
  return [
    ...(waveform === undefined ? [] : [{ path: waveform, form: vcdForm, list: chosen }]),
    ...(table === undefined ? [] : [{ path: table, form: tableForm, list: chosen }]),
    ...(picture === undefined ? [] : [{ path: picture, form: pictureForm, list: shown }]),
  ];
}

/** The window asked for, the whole run unless given. Throws UsageError where it ends first. */
export function windowOf({ from = 0, to = Number.POSITIVE_INFINITY, picture }: WaveOptions) {
  if (from > to) throw new UsageError(`error: --from ${from} comes after --to ${to}`);
  if (picture !== undefined && to !== Number.POSITIVE_INFINITY && to - from >= MOST_SHOWN.cycles) {
    throw new UsageError(`error: --picture shows at most ${MOST_SHOWN.cycles} cycles`);
  }
  return { from, to } satisfies WaveWindow;
}

/** The outlets that write the waves asked for, if any. */
export function waveOutlets(design: Design, options: WaveOptions & ActivityFiles): OutletPlan[] {
  const window = windowOf(options);
  return wavesWanted(design, options).map(({ path, form, list }) =>
    writeWave(path, form, list, window),
  );
}

/** What --nets shows of a design; see `withMemoryWords`. */
export interface ShownDesign<Options extends WaveOptions> {
  readonly design: Design;
  /** With patterns for that design. */
  readonly options: Options;
  /** Tells its circuit from others of the same netlist. */
  readonly key: string;
}

/** A design of which the words of memories that --nets names are signals. Throws UsageError. */
export function shownDesign<Options extends WaveOptions>(
  design: Design,
  options: Options,
): ShownDesign<Options> {
  const { nets = [] } = options;
  const { circuit, layout } = design;
  const shown = orUsage(() => withMemoryWords(circuit, nets, layout.threeValued));
  if (shown.circuit === circuit) return { design, options, key: '' };
  return {
    design: { ...design, circuit: shown.circuit },
    options: { ...options, nets: shown.patterns },
    key: JSON.stringify(nets),
  };
}

/** The signals of --nets, all without it. Throws UsageError for patterns that choose nothing. */
export function chosenSignals(circuit: Circuit, nets: readonly string[]): SignalList {
  return orUsage(() => signalsOf(circuit, nets));
}

function orUsage<T>(choose: () => T): T {
  try {
    return choose();
  } catch (error) {
    if (error instanceof UnmatchedPattern) throw new UsageError(`error: --nets ${error.message}`);
    throw error;
  }
}

// Times in a dump are twice the cycles, and whole numbers.
const LAST_CYCLE = 2 ** 51;

function cycleArgument(text: string): number {
  const value = /^\d[\d_]*$/.test(text) ? Number(text.replaceAll('_', '')) : Number.NaN;
  if (value <= LAST_CYCLE) return value;
  throw new InvalidArgumentError('Give the number of a cycle, from 0 on.');
}
