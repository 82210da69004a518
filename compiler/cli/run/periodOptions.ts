import { type Command, Option } from 'commander';
import { rowStride } from '../../../runtime/layout.js';
import type { Design } from '../../compile.js';
import { PeriodSearch } from '../../period/periodSearch.js';
import { allRows, repeatedRows } from '../../run/repeatedRows.js';
import { UsageError } from '../usageError.js';
import { type ChosenStimulus, type StimulusOptions, stimulusOf } from './stimulusOptions.js';
import type { StopOptions } from './stopOptions.js';

/** Whether the stimulus comes again, and whether states are looked for that do. */
export interface PeriodOptions {
  readonly repeat?: true;
  readonly findPeriod?: true;
}

/** Adds the options for what comes again and again. */
export function addPeriodOptions(command: Command): Command {
  return command
    .option('--repeat', 'begin the stimulus again after its last row')
    .addOption(
      new Option(
        '--find-period',
        'go on with the inputs held (or with --repeat) until a state comes again; tell when ' +
          'it came first and how long the period is',
      ).conflicts('random'),
    );
}

/** A stimulus, how long to run, and the outlets that go with it. */
export interface ChosenCourse extends ChosenStimulus {
  /** Undefined where it is as long as the stimulus. */
  readonly cycles: number | undefined;
}

/**
 * The stimulus asked for from a cycle on, repeated and watched for a period where that is wanted.
 * Throws UsageError as `stimulusOf` does, and where the run would have no end.
 */
export async function courseOf(
  design: Design,
  options: StimulusOptions & PeriodOptions & StopOptions,
  { from = 0, interrupt }: { readonly from?: number; readonly interrupt?: AbortSignal } = {},
): Promise<ChosenCourse> {
  const { repeat, findPeriod, stimulus: path } = options;
  if (repeat && path === undefined) {
    throw new UsageError('error: --repeat is for --stimulus FILE, which is missing');
  }
  // Something else will end it.
  const isOpen = findPeriod || (options.stopWhen !== undefined && (path === undefined || repeat));
  const cycles = options.cycles ?? (isOpen ? Number.MAX_SAFE_INTEGER : undefined);
  if (repeat && cycles === undefined) {
    throw new UsageError(
      'error: --repeat has no end; say how long to run with --cycles N, or --stop-when',
    );
  }
  const endless = cycles === undefined ? {} : { cycles };
  const chosen = await stimulusOf(design, { ...options, ...endless }, repeat ? 0 : from);
  const rows = repeat ? await rowsOf(design, chosen) : undefined;
  const stride = rowStride(design.layout.inputs, design.layout.threeValued);
  // Without a stimulus nothing but the held row is to come.
  const held = findPeriod && path === undefined ? [] : chosen.stimulus;
  const stimulus = rows === undefined ? held : repeatedRows(rows, stride, from);
  if (!findPeriod) return { ...chosen, stimulus, cycles };
  const search = new PeriodSearch({ ...(rows && { rows }), ...(interrupt && { interrupt }) });
  const watched = rows === undefined ? search.over(stimulus) : stimulus;
  return { ...chosen, stimulus: watched, outlets: [...chosen.outlets, search.plan], cycles };
}

async function rowsOf({ layout }: Design, { stimulus, looksBack }: ChosenStimulus) {
  if (looksBack) {
    throw new UsageError(
      'error: --repeat: a stimulus that looks back at the response cannot be repeated',
    );
  }
  try {
    return await allRows(stimulus, layout.inputs, layout.threeValued);
  } catch (error) {
    if (error instanceof RangeError) throw new UsageError(`error: --repeat: ${error.message}`);
    throw error;
  }
}
