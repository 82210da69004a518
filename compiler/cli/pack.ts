import { Command, InvalidArgumentError, Option } from 'commander';
import { type LaneCount, laneCounts } from '../../runtime/laneLayout.js';
import type { ClockTiming } from '../circuit/clockSchedule.js';
import type { Design } from '../compile.js';
import { startEmitter } from '../emit/emitter.js';
import { PackageDeparture } from '../pack/check.js';
import type { ReadingOptions } from '../pack/fingerprint.js';
import type { KeepNames } from '../pack/keptNets.js';
import { type NpmName, npmNameOf } from '../pack/packageJson.js';
import { type PackSummary, packDesign } from '../pack/packDesign.js';
import { FolderRefused } from '../pack/writePackage.js';
import { REGISTER_LIMIT } from '../read/verilog/behaviour/memorySelect.js';
import { counted, figure } from '../report/figures.js';
import { Progress } from '../run/progress.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { printDiagnostics } from './printDiagnostics.js';
import { UsageError } from './usageError.js';
import { version } from './version.js';

interface PackOptions extends NetlistOptions, ClockOptions {
  readonly output?: string;
  readonly page?: string;
  readonly keepNames?: KeepNames;
  readonly lanes: string;
  readonly unknown?: true;
  readonly name?: NpmName;
  readonly json?: true;
}

/** The verb `pack`: a model package for web tools. */
export function packCommand(): Command {
  return addClockOption(addNetlistOptions(new Command('pack')))
    .description('Writes a netlist as a folder that web tools import: module, types, README.')
    .option('--output <dir>', 'folder to write; an earlier package there is replaced')
    .option('--page <file>', 'write one HTML file that holds the model and opens from a disk')
    .option(
      '--keep-names <which>',
      'inner nets that can be looked at: ports (only registers, the default), all, or\n' +
        'those whose name fits, with * and ? (repeatable); they cost space, no time',
      addKept,
    )
    .addOption(
      new Option('--lanes <count>', 'independent sequences that run side by side in the module')
        .choices(['1', ...laneCounts.map(String)])
        .default('1'),
    )
    .option('--unknown', 'three values: registers without a start are x at power-up')
    .option('--name <name[@version]>', 'add a package.json, to install or publish under', npmName)
    .option('--json', 'print the summary as JSON')
    .addHelpText('after', HELP)
    .action(pack);
}

const HELP = `
The folder holds model.wasm, model.mjs, worker.mjs, model.d.ts, manifest.json, an example
and a README for this netlist; the page has the model inside and needs nothing else.
Before either appears, the package runs at least 10,000 random
cycles or 5 seconds beside the reference interpreter, and must agree in every bit.

With --lanes the module runs many sequences of the circuit at once, each with inputs and a state
of its own; the page and circuits with memories have one.

Exit status: 0 written, 1 the package departs from the reference and was not written,
2 the netlist or the request is wrong.

Example:
  clockstride pack lock.v --output lock-model --name @works/lock --page lock.html`;

async function pack(files: string[], options: PackOptions): Promise<void> {
  const { output, page } = options;
  if (output === undefined && page === undefined) {
    throw new UsageError('error: say what to write, with --output DIR or --page FILE');
  }
  const lanes = Number(options.lanes) as 1 | LaneCount;
  if (lanes !== 1 && page !== undefined) {
    throw new UsageError('error: a page shows one sequence; give --lanes without --page');
  }
  const emitter = startEmitter();
  // The folder that is being filled goes with the process.
  process.once('SIGINT', () => process.exit(1));
  let progress: Progress | undefined;
  try {
    const { circuit, found } = await loadCircuit(files, options);
    const design = timedDesign(circuit, options, { threeValued: options.unknown ?? false });
    if (lanes !== 1) refuseMemories(design);
    printDiagnostics(found);
    const summary = await packDesign(design, {
      ...(output !== undefined && { output }),
      ...(page !== undefined && { page }),
      keepNames: options.keepNames ?? 'ports',
      lanes,
      ...(options.name && { npmName: options.name }),
      version: version(),
      reading: readingOf(options),
      emitter,
      onProgress: (cycles, of) => {
        progress ??= new Progress(of);
        progress.update(cycles);
      },
    });
    process.stdout.write(`${options.json ? JSON.stringify(summary, null, 2) : textOf(summary)}\n`);
  } catch (error) {
    if (error instanceof FolderRefused) throw new UsageError(`error: ${error.message}`);
    if (!(error instanceof PackageDeparture)) throw error;
    process.stderr.write(`error: ${error.message}; nothing was written\n`);
    process.exitCode = 1;
  } finally {
    progress?.clear();
    await emitter.close();
  }
}

function refuseMemories({ layout: { memories } }: Design): void {
  const [memory] = memories;
  if (memory === undefined) return;
  const isSmall = memories.every(({ width, depth }) => width * depth <= REGISTER_LIMIT);
  const registers = `build it from registers with --memories-from ${REGISTER_LIMIT + 1}, or `;
  throw new UsageError(
    `error: lanes run no memories, and ${memory.name} is one; ` +
      `${isSmall ? registers : ''}leave its module out by --black-box`,
  );
}

function readingOf({
  top,
  define,
  blackBox,
  replace,
  clock,
  memoriesFrom,
}: PackOptions): ReadingOptions {
  const pace = ({ port, period, offset }: ClockTiming): string =>
    `${port}=${period}${offset === 0 ? '' : `@${offset}`}`;
  return {
    ...(top !== undefined && { top }),
    ...(define && { define: Object.fromEntries(define) }),
    ...(blackBox && { blackBox }),
    ...(replace && { replace: [...replace.keys()] }),
    ...(clock && { clock: clock.map(pace) }),
    ...(memoriesFrom !== undefined && { memoriesFrom }),
  };
}

function textOf({ model, output, page, files, check, keptNets }: PackSummary): string {
  const sizes = ['model.wasm', 'model.mjs', 'worker.mjs']
    .filter((name) => name in files)
    .map((name) => `  ${name.padEnd(12)} ${figure(files[name]!)} bytes`);
  return [
    ...(output === undefined ? [] : [`${model} is packed in ${output}`, ...sizes]),
    ...(page === undefined ? [] : [`${model} as a page is ${page}`]),
    `  ${counted(keptNets, 'name')} to peek at`,
    `agrees with the reference over ${figure(check.cycles)} cycles of random inputs (seed ${check.seed})`,
  ].join('\n');
}

function addKept(text: string, before: KeepNames | undefined): KeepNames {
  if (before === undefined && (text === 'all' || text === 'ports')) return text;
  if (typeof before === 'string' || text === 'all' || text === 'ports') {
    throw new InvalidArgumentError('Give all, ports, or patterns.');
  }
  return [...(before ?? []), text];
}

function npmName(text: string): NpmName {
  const name = npmNameOf(text);
  if (name !== undefined) return name;
  throw new InvalidArgumentError('Give a package name in lower case, NAME or NAME@1.2.3.');
}
