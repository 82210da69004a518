import type { Command } from 'commander';
import type { Design } from '../../compile.js';
import { addConditions } from '../../condition/conditions.js';
import { sampledLevel } from '../../condition/sampledLevel.js';
import { shellText } from '../../report/shellText.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { MOST_CONDITIONS, stopWhen } from '../../run/outlets/stopWhen.js';
import { positiveArgument } from '../numbers.js';
import { UsageError } from '../usageError.js';

/** What ends a run before its last cycle. */
export interface StopOptions {
  readonly stopWhen?: readonly string[];
  readonly stopAfter?: number;
  /** A cycle in which the run has stopped before it is gone on with. */
  readonly stopPast?: number;
}

/** Adds the options for conditions that end a run. */
export function addStopOptions(command: Command): Command {
  return command
    .option(
      '--stop-when <expression>',
      'end the run in the cycle in which this holds when the outputs are sampled: a Verilog\n' +
        'expression over nets by their hierarchical names, such as "cpu.pc == 16\'h40 && !cpu.halt";\n' +
        'repeatable',
      (text: string, before: readonly string[] = []) => [...before, text],
    )
    .option(
      '--stop-after <n>',
      'with --stop-when: not before its N-th occurrence; cycles in a row in which it holds are one',
      positiveArgument,
    );
}

/** A design that can be stopped, and what stops it. */
export interface Stops {
  /** The one given, with gates for the conditions. */
  readonly design: Design;
  readonly outlets: readonly OutletPlan[];
  /** Tells a circuit with these gates from one without. */
  readonly key: string;
}

/**
 * What ends a run before its last cycle, if anything; `record` is the folder of its record. Throws
 * InputError for what is wrong with an expression, and UsageError.
 */
export function stopsOf(design: Design, options: StopOptions, record?: string): Stops {
  const { stopWhen: texts = [], stopAfter: after = 1, stopPast: past } = options;
  if (texts.length === 0) {
    if (options.stopAfter === undefined) return { design, outlets: [], key: '' };
    throw new UsageError('error: --stop-after is for --stop-when EXPRESSION, which is missing');
  }
  if (texts.length > MOST_CONDITIONS) {
    throw new UsageError(`error: --stop-when: at most ${MOST_CONDITIONS} expressions`);
  }
  const { threeValued } = design.layout;
  const { circuit, nets } = addConditions(design.circuit, texts, {
    ...{ threeValued, name: '--stop-when' },
  });
  const conditions = texts.map((text, i) => ({ text: text.trim(), net: nets[i]! }));
  for (const { text, net } of conditions) refuseInactive({ ...design, circuit }, text, net);
  const lookAround = (cycle: number): string => lookingAround(cycle, record);
  return {
    design: { ...design, circuit },
    outlets: [stopWhen(conditions, { after, lookAround, ...(past !== undefined && { past }) })],
    // Not the key of `shownDesign` for the same texts.
    key: `stop ${JSON.stringify(texts)}`,
  };
}

// Whoever names a clock means its edge, and would wait for ever.
function refuseInactive({ circuit, clocks }: Design, text: string, net: number): void {
  const { level, clocks: read } = sampledLevel(circuit, clocks.ports, net);
  const [clock] = read;
  if (level !== 0 || clock === undefined) return;
  throw new UsageError(
    `error: --stop-when: ${text} never holds, for the clock ${clock.name} is ${clock.inactive} ` +
      'whenever outputs are sampled',
  );
}

/** Cycles that are shown before and after the one in which a run stopped. */
const AROUND = 20;

// Without a record the run has to go again, without what has ended it and what it has written.
function lookingAround(cycle: number, record: string | undefined): string {
  const from = Math.max(0, cycle - AROUND);
  if (record !== undefined) {
    const window = ['--from', `${from}`, '--to', `${cycle}`, '--picture', 'stop.svg'];
    return shellText(['clockstride', 'revisit', record, ...window]);
  }
  const to = cycle + AROUND;
  const window = ['--from', `${from}`, '--to', `${to}`, '--picture', 'stop.svg'];
  const again = repeatedWords(process.argv.slice(2));
  return shellText(['clockstride', ...again, '--cycles', `${to + 1}`, ...window]);
}

// Options of a run that are not repeated: those with a value, with several, and others.
const VALUED: ReadonlySet<string> = new Set([
  ...['--stop-when', '--stop-after', '--cycles', '--response', '--response-form'],
  ...['--ports', '--every', '--from', '--to', '--waveform', '--table', '--picture'],
  ...['--activity', '--activity-picture', '--states-table', '--states-graph'],
  ...['--expect', '--expect-form', '--expect-model', '--expect-top', '--expect-signature'],
]);
const VARIADIC: ReadonlySet<string> = new Set(['--states', '--expect-netlist']);
const PLAIN: ReadonlySet<string> = new Set(['--changes', '--json', '--signature', '--all']);

function repeatedWords(words: readonly string[]): string[] {
  const kept: string[] = [];
  for (let i = 0; i < words.length; i++) {
    const [name] = words[i]!.split('=', 1) as [string];
    // Its value, where that is a word of its own.
    if (VALUED.has(name)) i += name === words[i] ? 1 : 0;
    else if (VARIADIC.has(name)) while (i + 1 < words.length && !words[i + 1]!.startsWith('-')) i++;
    else if (!PLAIN.has(name)) kept.push(words[i]!);
  }
  return kept;
}
