import { Command, InvalidArgumentError, Option } from 'commander';
import { readStimulus } from '../../runtime/node/index.js';
import type { StimulusBlock } from '../../runtime/stream.js';
import type { Circuit } from '../circuit/circuit.js';
import type { Design } from '../compile.js';
import { REGISTER_LIMIT } from '../read/verilog/behaviour/memorySelect.js';
import { shellText } from '../report/shellText.js';
import { settlePicture } from '../settle/picture/settlePicture.js';
import { MOST_LANES, settleDesign } from '../settle/settleDesign.js';
import { isAllKnown } from '../settle/settleReport.js';
import { reportText } from '../settle/text/reportText.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { countArgument, seedArgument } from './numbers.js';
import { printDiagnostics } from './printDiagnostics.js';
import { UsageError } from './usageError.js';
import { writePicture } from './writePicture.js';

interface SettleOptions extends NetlistOptions, ClockOptions {
  readonly stimulus?: string;
  readonly cycles?: number;
  readonly lanes: number;
  readonly seed: bigint;
  readonly json?: true;
  readonly picture?: string;
}

/** The verb `settle`: what a reset sequence makes of an unknown power-up. */
export function settleCommand(): Command {
  return addClockOption(addNetlistOptions(new Command('settle')))
    .description('Tells which registers a reset sequence brings to a known value, and when.')
    .option('--stimulus <file>', 'input values, a CSV row a cycle; all 0 unless given')
    .option(
      '--cycles <n>',
      'how long; unless given, the stimulus and then until nothing changes any more',
      countArgument,
    )
    .addOption(
      new Option('--lanes <n>', 'random power-ups to run side by side')
        .argParser(laneCount)
        .default(128),
    )
    .addOption(
      new Option('--seed <seed>', 'of lane 0; lane i has this seed + i')
        .argParser(seedArgument)
        .default(0n, '0'),
    )
    .option('--json', 'print everything as JSON')
    .option('--picture <file>', 'draw the unknown bits by cycle as SVG')
    .addHelpText('after', HELP)
    .action(settle);
}

const HELP = `
The circuit runs with three values from an unknown power-up, which proves what becomes
known, and with two values from many random power-ups, a lane each, which shows what
really depends on power-up. A value that the netlist itself gives at power-up counts.
Without --cycles the last row of the stimulus holds until every run repeats its states,
until nothing has become known or unknown for 256 cycles, or for 4096 cycles.

Exit status: 0 every state element is known at the end, 1 some depend on power-up or
stay unknown with three values, or a lane had a cycle without result, 2 an input or the
request is wrong.

Example:
  clockstride settle lock.v --stimulus reset.csv --picture reset.svg`;

async function settle(files: string[], options: SettleOptions): Promise<void> {
  const { circuit, found } = await loadCircuit(files, { memoriesFrom: ALL_REGISTERS, ...options });
  const design = timedDesign(circuit, options);
  const [memory] = design.layout.memories;
  if (memory !== undefined) {
    throw new UsageError(
      `error: settle follows registers and latches, and ${memory.name} is a memory of more than ` +
        `${REGISTER_LIMIT} bits; make it smaller, or leave its module out by --black-box`,
    );
  }
  const report = await settleDesign(design, { ...options, ...stimulusOf(design, options) });
  if (options.picture !== undefined) writePicture(options.picture, settlePicture(report));
  printDiagnostics(found);
  const rerun = rerunCommand(rerunWords(circuit, options), report.cycles);
  const text = options.json
    ? JSON.stringify({ ...report, rerun }, null, 2)
    : reportText(report, rerun);
  process.stdout.write(`${text}\n`);
  if (!isAllKnown(report)) process.exitCode = 1;
}

function stimulusOf(
  { layout }: Design,
  { stimulus }: SettleOptions,
): { stimulus: AsyncIterable<StimulusBlock> | Iterable<StimulusBlock>; notes: string[] } {
  if (stimulus !== undefined) return { stimulus: readStimulus(stimulus, layout), notes: [] };
  const held = 'all inputs are held at 0; use --stimulus to drive them';
  return { stimulus: [], notes: layout.inputs.bits > 0 ? [held] : [] };
}

/** Up to this size arrays are followed bit by bit, as registers. */
const ALL_REGISTERS = REGISTER_LIMIT + 1;

// The words of the command line behind the verb. A run must know arrays as registers, as it was here.
function rerunWords({ hierarchy }: Circuit, { memoriesFrom }: SettleOptions): string[] {
  const hasArrays = hierarchy.modules.some(({ signals }) =>
    [...signals].some(({ name }) => name.endsWith(']')),
  );
  const isTold = memoriesFrom !== undefined || !hasArrays;
  return [...process.argv.slice(3), ...(isTold ? [] : ['--memories-from', `${ALL_REGISTERS}`])];
}

/** Options of this verb alone that take a value. */
const OWN = ['--cycles', '--lanes', '--seed', '--picture'];

/**
 * The command that runs one lane again, up to the seed, for a shell as in POSIX.1: what was asked
 * for on the command line, so that all that makes the netlist stays the same.
 */
function rerunCommand(words: readonly string[], cycles: number): string {
  const kept = words.filter(
    (word, i) =>
      word !== '--json' &&
      !OWN.includes(word) &&
      !OWN.includes(words[i - 1] ?? '') &&
      !OWN.some((option) => word.startsWith(`${option}=`)),
  );
  const length = ['--cycles', `${cycles}`];
  return shellText(['clockstride', 'run', ...kept, ...length, '--power-up', 'random', '--seed']);
}

function laneCount(text: string): number {
  const value = countArgument(text);
  if (value >= 2 && value <= MOST_LANES) return value;
  throw new InvalidArgumentError(`Give a number from 2 to ${MOST_LANES}.`);
}
