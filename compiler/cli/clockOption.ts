import { type Command, InvalidArgumentError } from 'commander';
import type { Circuit } from '../circuit/circuit.js';
import type { ClockTiming } from '../circuit/clockSchedule.js';
import { type CompileOptions, type Design, designOf } from '../compile.js';
import { UsageError } from './usageError.js';

/** What `--clock` gives. */
export interface ClockOptions {
  readonly clock?: readonly ClockTiming[];
}

/** Adds the option that gives clocks a pace of their own. */
export function addClockOption(command: Command): Command {
  return command.option(
    '--clock <port=period[@offset]>',
    'when a clock ticks, in whole ticks (repeatable; the first one is the base clock,\n' +
      'whose period is a cycle); all clocks tick together unless given',
    addTiming,
  );
}

/** The design of a circuit with the clocks asked for. Throws UsageError where they do not fit. */
export function timedDesign(
  circuit: Circuit,
  { clock }: ClockOptions,
  options: CompileOptions = {},
): Design {
  try {
    return designOf(circuit, { ...options, ...(clock && { timings: clock }) });
  } catch (error) {
    if (error instanceof RangeError) throw new UsageError(`error: --clock: ${error.message}`);
    throw error;
  }
}

function addTiming(text: string, before: readonly ClockTiming[] = []): ClockTiming[] {
  const [, port, period, offset] = /^(.+)=(\d+)(?:@(\d+))?$/.exec(text) ?? [];
  if (port === undefined) {
    throw new InvalidArgumentError('Give PORT=PERIOD or PORT=PERIOD@OFFSET, in whole ticks.');
  }
  return [...before, { port, period: Number(period), offset: Number(offset ?? 0) }];
}
