import { type Command, InvalidArgumentError, Option } from 'commander';
import type { ModelLayout } from '../../../runtime/layout.js';
import {
  bitWeights,
  openStimulus,
  type ValueForm,
  valueForms,
} from '../../../runtime/node/index.js';
import { skipCycles } from '../../../runtime/skipCycles.js';
import { heldStimulus, type StimulusBlock } from '../../../runtime/stream.js';
import { type BitWeight, weightedStimulus } from '../../../runtime/weightedStimulus.js';
import type { ClockTiming } from '../../circuit/clockSchedule.js';
import type { Design } from '../../compile.js';
import { baseClocks } from '../../run/baseClocks.js';
import { followStimulus } from '../../run/outlets/followStimulus.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { countArgument, positiveArgument, seedArgument } from '../numbers.js';
import { UsageError } from '../usageError.js';

/** Where the inputs come from, and for how long. */
export interface StimulusOptions {
  readonly stimulus?: string;
  readonly stimulusForm?: ValueForm;
  readonly stimulusPeriod?: string;
  readonly stimulusScope?: string;
  readonly random?: bigint;
  readonly hold?: number;
  readonly weight?: ReadonlyMap<string, number>;
  readonly cycles?: number;
}

/** Adds the options that say what drives the inputs. */
export function addStimulusOptions(command: Command): Command {
  return command
    .addOption(
      new Option(
        '--stimulus <file>',
        'input values: CSV; packed rows (.rows), a value change dump (.vcd) or a JavaScript\n' +
          'module (.mjs), by the ending; compressed where .gz follows; - for standard input',
      ).conflicts('random'),
    )
    .addOption(
      new Option('--stimulus-form <form>', 'the form, where no ending tells it').choices(
        valueForms,
      ),
    )
    .option('--stimulus-period <time>', 'of a .vcd without the clock: length of a cycle (10ns)')
    .option('--stimulus-scope <name>', 'of a .vcd: the scope that has the ports (bench.block)')
    .option('--random <seed>', 'fresh random bits for all inputs in every cycle', seedArgument)
    .option('--hold <n>', 'with --random: each row lasts for N cycles', positiveArgument)
    .option(
      '--weight <port=p>',
      'with --random: bits of PORT (or of PORT[7:4]) are 1 with probability P (repeatable)',
      addWeight,
    )
    .option('--cycles <n>', 'how long; as long as the stimulus unless given', countArgument);
}

/** What drives the inputs, and what goes with it. */
export interface ChosenStimulus {
  readonly stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>;
  readonly notes: readonly string[];
  readonly outlets: readonly OutletPlan[];
  /** Whether it depends on the response before. */
  readonly looksBack: boolean;
}

/**
 * The stimulus asked for, or what is left of it after `from` cycles. Throws UsageError where the
 * length of the run is not known and where options do not fit together.
 */
export async function stimulusOf(
  design: Design,
  options: StimulusOptions & { readonly clock?: readonly ClockTiming[] },
  from = 0,
): Promise<ChosenStimulus> {
  const { stimulus: path, random, cycles } = options;
  refuseStray(options);
  if (path !== undefined) {
    const { stimulusForm: form, stimulusPeriod: period, stimulusScope: scope } = options;
    const source = await openStimulus(path, design.layout, {
      clocks: baseClocks(design, options.clock),
      ...(form !== undefined && { form }),
      ...(period !== undefined && { period }),
      ...(scope !== undefined && { scope }),
    });
    const blocks = source.blocks();
    return {
      stimulus: from === 0 ? blocks : skipCycles(blocks, from),
      notes: [],
      outlets: [followStimulus(source)],
      looksBack: source.see !== undefined,
    };
  }
  if (cycles === undefined) {
    throw new UsageError(
      'error: without a stimulus, say how long to run with --cycles N, or --stop-when',
    );
  }
  const { layout } = design;
  if (random !== undefined) {
    const { hold = 1 } = options;
    const weights = weightsOf(layout, options.weight ?? new Map());
    const stimulus = weightedStimulus(layout, random, cycles - from, { hold, weights, from });
    return { stimulus, notes: [], outlets: [], looksBack: false };
  }
  const held = 'all inputs are held at 0; use --stimulus or --random to drive them';
  return {
    stimulus: heldStimulus(layout, Math.max(0, cycles - from)),
    notes: layout.inputs.bits > 0 ? [held] : [],
    outlets: [],
    looksBack: false,
  };
}

// An option that would change nothing is most likely a mistake.
function refuseStray(options: StimulusOptions): void {
  const { stimulus, random, stimulusForm, stimulusPeriod, stimulusScope, hold, weight } = options;
  const wrong: [string, boolean, string][] = [
    ['--stimulus-form', stimulusForm !== undefined && stimulus === undefined, '--stimulus FILE'],
    [
      '--stimulus-period',
      stimulusPeriod !== undefined && stimulus === undefined,
      '--stimulus FILE',
    ],
    ['--stimulus-scope', stimulusScope !== undefined && stimulus === undefined, '--stimulus FILE'],
    ['--hold', hold !== undefined && random === undefined, '--random SEED'],
    ['--weight', weight !== undefined && random === undefined, '--random SEED'],
  ];
  const [option, , missing] = wrong.find(([, isStray]) => isStray) ?? [];
  if (option) throw new UsageError(`error: ${option} is for ${missing}, which is missing`);
}

function weightsOf(layout: ModelLayout, weights: ReadonlyMap<string, number>): BitWeight[] {
  try {
    return bitWeights(layout, weights);
  } catch (error) {
    if (error instanceof RangeError) throw new UsageError(`error: --weight: ${error.message}`);
    throw error;
  }
}

function addWeight(text: string, before: ReadonlyMap<string, number> = new Map()) {
  const [, port, number] = /^(.+)=([^=]+)$/.exec(text) ?? [];
  const probability = Number(number);
  if (port === undefined || !(probability >= 0 && probability <= 1)) {
    throw new InvalidArgumentError('Give PORT=P, P from 0 to 1.');
  }
  return new Map(before).set(port, probability);
}
