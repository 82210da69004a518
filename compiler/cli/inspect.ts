import { Command } from 'commander';
import { designOf } from '../compile.js';
import { levelPlot } from '../report/inspect/levelPlot.js';
import { inspectionPage, type Paint } from '../report/inspect/page.js';
import { inspect } from '../report/inspection.js';
import { addNetlistOptions, loadCircuit, type NetlistOptions } from './netlists.js';
import { writePicture } from './writePicture.js';

interface InspectOptions extends NetlistOptions {
  readonly json?: true;
  readonly levelPlot?: string;
}

/** The verb `inspect`: structure and problems of a netlist. */
export function inspectCommand(): Command {
  return addNetlistOptions(new Command('inspect'))
    .description('Shows the structure of a netlist: ports, clocks, gates, registers, problems.')
    .option('--json', 'print the same as JSON')
    .option('--level-plot <file>', 'draw gates by level and depth between registers as SVG')
    .addHelpText(
      'after',
      `
Exit status: 0 no problem of severity error, 1 there is one, 2 the netlist cannot be read
or the plot not be written.

Example:
  clockstride inspect lock.v cells.v --top lock --level-plot lock.svg`,
    )
    .action(async (files: string[], options: InspectOptions) => {
      const { circuit, found } = await loadCircuit(files, options);
      const inspection = inspect(designOf(circuit), found);
      if (options.levelPlot !== undefined) writePicture(options.levelPlot, levelPlot(inspection));
      const text = options.json
        ? JSON.stringify(inspection, null, 2)
        : inspectionPage(inspection, isColoured() ? coloured : undefined);
      process.stdout.write(`${text}\n`);
      if (inspection.problems.some(({ severity }) => severity === 'error')) process.exitCode = 1;
    });
}

// https://no-color.org
const isColoured = (): boolean => process.stdout.isTTY && !process.env.NO_COLOR;

// ECMA-48, select graphic rendition.
const rendition = { heading: 1, error: 31, warning: 33, note: 36 } as const;

const coloured: Paint = (text, part) => `\x1b[${rendition[part]}m${text}\x1b[0m`;
