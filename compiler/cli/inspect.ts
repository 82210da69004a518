import { Command } from 'commander';
import { designOf } from '../compile.js';
import { inspect } from '../report/inspection.js';
import { inspectionText } from '../report/inspectionText.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';

/** The verb `inspect`: structure and problems of a netlist. */
export function inspectCommand(): Command {
  return addNetlistOptions(new Command('inspect'))
    .description('Shows the structure of a netlist: ports, clocks, gates, registers, problems.')
    .option('--json', 'print the same as JSON')
    .addHelpText(
      'after',
      `
Exit status: 0 no problem of severity error, 1 there is one, 2 the netlist cannot be read.

Example:
  clockstride inspect lock.v cells.v --top lock`,
    )
    .action(async (files: string[], options: NetlistOptions & { json?: true }) => {
      const { circuit, found } = await loadCircuit(files, options);
      const inspection = inspect(designOf(circuit), found);
      const text = options.json ? JSON.stringify(inspection, null, 2) : inspectionText(inspection);
      process.stdout.write(`${text}\n`);
      if (inspection.problems.some(({ severity }) => severity === 'error')) process.exitCode = 1;
    });
}
