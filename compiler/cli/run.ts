import { Command, Option } from 'commander';
import { readStimulus } from '../../runtime/node/index.js';
import { heldStimulus, randomStimulus, type StimulusBlock } from '../../runtime/stream.js';
import { type PowerUp, powerUpModes } from '../circuit/powerUp.js';
import { startingRegisters } from '../circuit/startingRegisters.js';
import type { Design } from '../compile.js';
import { startEmitter } from '../emit/emitter.js';
import { type EngineName, engineNames } from '../engines.js';
import { runDesign } from '../run/runDesign.js';
import { summaryText } from '../run/runSummary.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { countArgument, seedArgument } from './numbers.js';
import { printDiagnostics } from './printDiagnostics.js';
import { UsageError } from './usageError.js';

interface RunOptions extends NetlistOptions, ClockOptions {
  readonly stimulus?: string;
  readonly random?: bigint;
  readonly cycles?: number;
  readonly response?: string;
  readonly expect?: string;
  readonly all?: true;
  readonly signature?: true;
  readonly powerUp?: PowerUp;
  readonly seed: bigint;
  readonly engine: EngineName;
  readonly json?: true;
}

/** The verb `run`: runs cycles of a netlist. */
export function runCommand(): Command {
  return addClockOption(addNetlistOptions(new Command('run')))
    .description('Runs cycles of a netlist and writes, compares or signs the response.')
    .addOption(
      new Option('--stimulus <file>', 'input values, a CSV row a cycle').conflicts('random'),
    )
    .option('--random <seed>', 'fresh random bits for all inputs in every cycle', seedArgument)
    .option('--cycles <n>', 'how long; as long as the stimulus unless given', countArgument)
    .option('--response <file>', 'write the outputs of every cycle as CSV')
    .option('--expect <file>', 'compare the outputs with this CSV; end at the first departure')
    .option('--all', 'with --expect: go on and list all departures')
    .option('--signature', 'print the CRC-64 of the response')
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
    .action(run);
}

const HELP = `
A stimulus table names input ports in its header; an empty field holds the value
before, a column @cycles tells how long a row lasts. The clock ticks by itself and has
no column. An expectation table has any of the columns of a response.

Exit status: 0 done and as expected, 1 done and a departure found or interrupted,
2 an input or the request is wrong, or a cycle has no result.

Example:
  clockstride run lock.v --stimulus boats.csv --cycles 2000000 --expect lights.csv`;

async function run(files: string[], options: RunOptions): Promise<void> {
  const powerUp = options.powerUp ?? 'zero';
  // The emitter takes a while to get ready: it does so while the netlist is read.
  const emitter = options.engine === 'wasm' ? startEmitter() : undefined;
  const { circuit, found } = await loadCircuit(files, options);
  const design = timedDesign(circuit, options, { threeValued: powerUp === 'unknown' });
  const { stimulus, notes } = stimulusOf(design, options);
  const interrupt = new AbortController();
  process.once('SIGINT', () => interrupt.abort());
  const summary = await runDesign(design, {
    ...options,
    powerUp,
    stimulus,
    notes,
    interrupt: interrupt.signal,
    // Not before: where a table is wrong, that is all there is to say.
    onStart: () => {
      printDiagnostics(found);
      if (options.powerUp === undefined) warnOfStart(design);
    },
    onDeparture: (text) => process.stdout.write(options.json ? '' : `${text}\n`),
    ...(emitter && { emitter }),
  });
  await emitter?.close();
  const text = options.json
    ? JSON.stringify(summary, null, 2)
    : summaryText(summary, options.expect);
  process.stdout.write(`${text}\n`);
  if (summary.mismatch ?? summary.stopped) process.exitCode = 1;
}

function warnOfStart({ circuit }: Design): void {
  const { withoutStart } = startingRegisters(circuit);
  if (withoutStart === 0) return;
  process.stderr.write(
    `warning: ${withoutStart} of ${circuit.registers.count} registers have neither an initial ` +
      `value nor a set or reset; they start at 0. Choose with --power-up. [register-no-start]\n`,
  );
}

function stimulusOf(
  { layout }: Design,
  options: RunOptions,
): { stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>; notes: string[] } {
  if (options.stimulus !== undefined) {
    return { stimulus: readStimulus(options.stimulus, layout), notes: [] };
  }
  const { cycles } = options;
  if (cycles === undefined) {
    throw new UsageError('error: without a stimulus, say how long to run with --cycles N');
  }
  if (options.random !== undefined) {
    return { stimulus: randomStimulus(layout, options.random, cycles), notes: [] };
  }
  const held = 'all inputs are held at 0; use --stimulus or --random to drive them';
  return {
    stimulus: heldStimulus(layout, cycles),
    notes: layout.inputs.bits > 0 ? [held] : [],
  };
}
