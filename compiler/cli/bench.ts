import { Command, InvalidArgumentError, Option } from 'commander';
import { RunFault } from '../../runtime/engine.js';
import { benchDesign } from '../report/bench.js';
import { EngineDisagreement } from '../report/benchAgreement.js';
import { type NativeChoice, nativeChoices } from '../report/benchOptions.js';
import { benchText } from '../report/benchText.js';
import { addClockOption, type ClockOptions, timedDesign } from './clockOption.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { printDiagnostics } from './printDiagnostics.js';

interface BenchCommandOptions extends NetlistOptions, ClockOptions {
  readonly json?: true;
  readonly seconds: number;
  readonly native: NativeChoice;
}

/** The verb `bench`: speed of generated code beside the interpreters and native C. */
export function benchCommand(): Command {
  return addClockOption(addNetlistOptions(new Command('bench')))
    .description('Measures generated code beside the interpreters and native C.')
    .option('--json', 'print the figures as JSON')
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
anything is measured. C is compiled by what CC names, or by cc, gcc or clang.

Exit status: 0 measured, 1 the engines disagree or a cycle has no result, 2 the netlist
cannot be used.

Example:
  clockstride bench sha256.v --seconds 3`,
    )
    .action(bench);
}

async function bench(
  files: string[],
  { json, seconds, native, clock, ...netlist }: BenchCommandOptions,
): Promise<void> {
  const { circuit, found } = await loadCircuit(files, netlist);
  const design = timedDesign(circuit, { ...(clock && { clock }) });
  printDiagnostics(found);
  try {
    const result = await benchDesign(design, { seconds, native, onProgress: tell });
    process.stdout.write(`${json ? JSON.stringify(result, null, 2) : benchText(result)}\n`);
  } catch (error) {
    if (!(error instanceof EngineDisagreement || error instanceof RunFault)) throw error;
    process.stderr.write(`${design.circuit.name}: ${error.message}\n`);
    process.exitCode = 1;
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
