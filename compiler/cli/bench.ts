import { Command, InvalidArgumentError, Option } from 'commander';
import { RunFault } from '../../runtime/engine.js';
import { benchPicture } from '../report/bench/benchPicture.js';
import { thisMachine } from '../report/bench/machine.js';
import { type BenchSuite, benchSuite } from '../report/bench/suite.js';
import { suiteText } from '../report/bench/suiteText.js';
import { benchDesign } from '../report/bench.js';
import { EngineDisagreement } from '../report/benchAgreement.js';
import { type NativeChoice, nativeChoices } from '../report/benchOptions.js';
import type { BenchResult } from '../report/benchResult.js';
import { benchText } from '../report/benchText.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { firstAnswer } from './firstAnswer.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { printDiagnostics } from './printDiagnostics.js';
import { UsageError } from './usageError.js';
import { writePicture } from './writePicture.js';

interface BenchCommandOptions extends NetlistOptions, ClockOptions {
  readonly json?: true;
  readonly each?: true;
  readonly picture?: string;
  readonly seconds: number;
  readonly native: NativeChoice;
}

/** The verb `bench`: speed of generated code beside the interpreters and native C. */
export function benchCommand(): Command {
  return addClockOption(addNetlistOptions(new Command('bench')))
    .description('Measures generated code beside the interpreters and native C.')
    .option('--json', 'print the figures as JSON')
    .option('--each', 'take each netlist as a circuit of its own; cell libraries (.lib) serve all')
    .option('--picture <file>', 'write an SVG picture of the speeds over native C')
    .option('--seconds <number>', 'measured time of each engine', positive, 1)
    .addOption(
      new Option('--native <when>', 'compile C too: auto leaves out circuits too large for it')
        .choices(nativeChoices)
        .default('auto'),
    )
    .addHelpText(
      'after',
      `
All engines run the same random stimulus, and their responses are compared before
anything is measured. C is compiled by what CC names, or by cc, gcc or clang, and once
more for this very machine (-march=native). The engine table is there where runs of the
circuit look cycles up that have come before; that is another algorithm.

Exit status: 0 measured, 1 the engines disagree or a cycle has no result, 2 the netlist
cannot be used.

Example:
  clockstride bench sha256.v --seconds 3
  clockstride bench --each uart.v aes128.v sha256.v --picture speed.svg`,
    )
    .action(bench);
}

async function bench(files: string[], options: BenchCommandOptions): Promise<void> {
  const { json, each, picture } = options;
  try {
    const results: BenchResult[] = [];
    for (const group of each ? circuitsOf(files) : [files]) {
      results.push(await measured(group, options));
    }
    const suite = benchSuite(thisMachine(), results);
    const result = each ? suite : results[0]!;
    const text = each ? suiteText(suite) : benchText(results[0]!);
    process.stdout.write(`${json ? JSON.stringify(result, null, 2) : text}\n`);
    if (picture !== undefined) draw(picture, suite);
  } catch (error) {
    if (!(error instanceof CircuitFailure)) throw error;
    process.stderr.write(`${error.message}\n`);
    process.exitCode = 1;
  }
}

/** Each netlist with all cell libraries. */
function circuitsOf(files: readonly string[]): string[][] {
  const isLibrary = (file: string): boolean => file.toLowerCase().endsWith('.lib');
  const libraries = files.filter(isLibrary);
  return files.filter((file) => !isLibrary(file)).map((file) => [file, ...libraries]);
}

/** No figure of a circuit is worth anything. */
class CircuitFailure extends Error {}

async function measured(
  files: readonly string[],
  { seconds, native, clock, ...netlist }: BenchCommandOptions,
): Promise<BenchResult> {
  const { circuit, found } = await loadCircuit(files, netlist);
  const design = timedDesign(circuit, { ...(clock && { clock }) });
  printDiagnostics(found);
  try {
    const result = await benchDesign(design, { seconds, native, onProgress: tell });
    tell('measuring the first answer');
    const first = await firstAnswer(files, { ...netlist, ...(clock && { clock }) });
    return { ...result, ...(first && { firstAnswer: first }) };
  } catch (error) {
    if (!(error instanceof EngineDisagreement || error instanceof RunFault)) throw error;
    throw new CircuitFailure(`${design.circuit.name}: ${error.message}`);
  }
}

function draw(path: string, suite: BenchSuite): void {
  try {
    writePicture(path, benchPicture(suite));
  } catch (error) {
    if (error instanceof RangeError) throw new UsageError(`error: --picture: ${error.message}`);
    throw error;
  }
}

// Whoever redirects stderr wants to find complaints in it, not the steps.
function tell(step: string): void {
  if (process.stderr.isTTY) process.stderr.write(`${step}\n`);
}

function positive(text: string): number {
  const value = Number(text);
  if (!(value > 0 && value <= 3600))
    throw new InvalidArgumentError('Give seconds: more than 0, at most 3600.');
  return value;
}
