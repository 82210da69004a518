import type { Command } from 'commander';
import type { Design } from '../../compile.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { followStates, type StatesFile } from '../../states/followStates.js';
import { statesPicture } from '../../states/picture/statesPicture.js';
import { statesGraph } from '../../states/statesGraph.js';
import { statesTable } from '../../states/statesTable.js';
import { stateVectors } from '../../states/stateVectors.js';
import { UnmatchedPattern } from '../../waveform/signalList.js';
import { UsageError } from '../usageError.js';

/** Which registers are followed as state machines, and where it is written what they did. */
export interface StatesOptions {
  readonly states?: readonly string[];
  readonly statesTable?: string;
  readonly statesGraph?: string;
}

/** Adds the options that follow state machines. */
export function addStatesOptions(command: Command): Command {
  return command
    .option(
      '--states <registers...>',
      'tell the states and transitions of state machines: registers by hierarchical name as for ' +
        "--nets, each a machine; several as one in braces: '{busy, phase[1:0]}'",
    )
    .option('--states-table <file>', 'write them as CSV')
    .option('--states-graph <file>', 'draw them as a graph: .svg, or .dot for Graphviz');
}

/** The outlet that follows states, if asked for. Throws UsageError for what cannot be followed. */
export function statesOutlets({ circuit }: Design, options: StatesOptions): OutletPlan[] {
  const { states, statesTable: table, statesGraph: graph } = options;
  if (states === undefined) {
    if ((table ?? graph) === undefined) return [];
    const option = table === undefined ? '--states-graph' : '--states-table';
    throw new UsageError(`error: ${option} is for --states REGISTERS, which is missing`);
  }
  const files: StatesFile[] = [];
  if (table !== undefined) files.push({ path: table, write: (_, __, all) => statesTable(all) });
  if (graph !== undefined) files.push({ path: graph, write: graphForm(graph) });
  try {
    return [followStates(stateVectors(circuit, states), files)];
  } catch (error) {
    if (error instanceof UnmatchedPattern) throw new UsageError(`error: --states ${error.message}`);
    throw error;
  }
}

function graphForm(path: string): StatesFile['write'] {
  if (path.endsWith('.svg')) return statesPicture;
  if (path.endsWith('.dot')) return (circuit, _, all) => statesGraph(circuit, all);
  throw new UsageError(`error: --states-graph ${path}: the ending tells the form, .svg or .dot`);
}
