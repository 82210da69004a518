import { type Command, Option } from 'commander';
import { formOf } from '../../../runtime/node/index.js';
import type { Design } from '../../compile.js';
import { type CompareDesignOptions, compareDesign } from '../../run/outlets/compareDesign.js';
import { compareFile } from '../../run/outlets/compareFile.js';
import { compareModel } from '../../run/outlets/compareModel.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { type ClockOptions, timedDesign } from '../clockOption.js';
import { loadCircuit, type NetlistOptions } from '../netlists.js';
import { UsageError } from '../usageError.js';

/** What the response is compared with. */
export interface ExpectationOptions {
  readonly expect?: string;
  readonly expectForm?: 'csv' | 'packed';
  readonly expectModel?: string;
  readonly expectNetlist?: readonly string[];
  readonly expectTop?: string;
  readonly all?: true;
}

/** Adds the options that say what is expected. */
export function addExpectationOptions(command: Command): Command {
  return command
    .option(
      '--expect <file>',
      'compare the outputs with this CSV or these packed rows (.rows); end at the first\n' +
        'departure; - for standard input',
    )
    .addOption(
      new Option('--expect-form <form>', 'the form, where no ending tells it').choices([
        'csv',
        'packed',
      ]),
    )
    .option('--expect-model <file>', 'compare the outputs with what a JavaScript module computes')
    .option(
      '--expect-netlist <file...>',
      'compare the outputs with those of another netlist that runs in lock step',
    )
    .option('--expect-top <name>', 'its top module; as for the first netlist unless given')
    .option('--all', 'go on after a departure and list all of them');
}

/** What else must be known to compare. */
export interface ExpectationContext
  extends Pick<CompareDesignOptions, 'engine' | 'powerUp' | 'seed' | 'emitter'> {
  readonly design: Design;
  /** Told each departure as it is found. */
  readonly onDeparture: (text: string) => void;
}

/**
 * The outlets that judge a response. Throws UsageError where the ports of the other netlist do not
 * fit, and InputError where it cannot be read.
 */
export async function expectationOutlets(
  options: ExpectationOptions & NetlistOptions & ClockOptions,
  context: ExpectationContext,
): Promise<OutletPlan[]> {
  const { expect, expectForm, expectModel, expectNetlist, expectTop } = options;
  const departures = { all: options.all ?? false, onDeparture: context.onDeparture };
  if (expectForm !== undefined && expect === undefined) {
    throw new UsageError('error: --expect-form is for --expect FILE, which is missing');
  }
  if (expectTop !== undefined && expectNetlist === undefined) {
    throw new UsageError('error: --expect-top is for --expect-netlist FILE, which is missing');
  }
  const plans: OutletPlan[] = [];
  if (expect !== undefined) {
    const form = expectForm ?? formOf(expect);
    if (form !== 'csv' && form !== 'packed') {
      throw new UsageError(`error: --expect ${expect}: expected are CSV or packed rows (.rows)`);
    }
    plans.push(compareFile(expect, { ...departures, form }));
  }
  if (expectModel !== undefined) plans.push(compareModel(expectModel, departures));
  if (expectNetlist !== undefined) {
    plans.push(await netlistOutlet(expectNetlist, options, { ...context, ...departures }));
  }
  return plans;
}

/** What a response is compared with, in words; undefined if with nothing. */
export function expectationName(options: ExpectationOptions): string | undefined {
  const { expect, expectModel, expectNetlist = [] } = options;
  const names = [expect, expectModel, expectNetlist.join(' ') || undefined];
  const given = names.filter((name) => name !== undefined);
  return given.length === 0 ? undefined : given.join(' and ');
}

async function netlistOutlet(
  files: readonly string[],
  options: ExpectationOptions & NetlistOptions & ClockOptions,
  context: ExpectationContext & CompareDesignOptions,
): Promise<OutletPlan> {
  const { expectTop, ...own } = options;
  const chosen = expectTop === undefined ? own : { ...own, top: expectTop };
  const { circuit } = await loadCircuit(files, chosen);
  const { threeValued } = context.design.layout;
  const other = timedDesign(circuit, options, { threeValued });
  try {
    return compareDesign(context.design, other, files.join(' '), context);
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    throw new UsageError(
      `error: --expect-netlist: the netlists differ in their ports: ${error.message}`,
    );
  }
}
