import { Command, CommanderError } from 'commander';
import { RunFault } from '../../runtime/engine.js';
import { FileError } from '../../runtime/node/index.js';
import { InputError } from '../diagnostics/diagnostics.js';
import { reason } from './netlists.js';
import { printDiagnostics } from './printDiagnostics.js';
import { UsageError } from './usageError.js';
import { version } from './version.js';

/** Exit status for a request or an input that is wrong. */
const WRONG_INPUT = 2;

/** What the system says of a pipe whose reader, such as `head`, has seen enough: no failure. */
const READER_GONE = 'EPIPE';

/** The verbs by name, each loaded when it is wanted. */
const verbs: Readonly<Record<string, () => Promise<Command>>> = {
  inspect: async () => (await import('./inspect.js')).inspectCommand(),
  run: async () => (await import('./run.js')).runCommand(),
  resume: async () => (await import('./resume.js')).resumeCommand(),
  revisit: async () => (await import('./revisit.js')).revisitCommand(),
  settle: async () => (await import('./settle.js')).settleCommand(),
  pack: async () => (await import('./pack.js')).packCommand(),
  bench: async () => (await import('./bench.js')).benchCommand(),
};

// Help and a misspelt verb need them all.
function verbsFor(wanted: string): Promise<Command[]> {
  const names = Object.hasOwn(verbs, wanted) ? [wanted] : Object.keys(verbs);
  return Promise.all(names.map((name) => verbs[name]!()));
}

async function program(): Promise<Command> {
  const command = new Command('clockstride')
    .description('Compiles a clocked gate-level netlist to WebAssembly and runs it.')
    .version(version())
    .addHelpText(
      'after',
      `
Zero-delay, cycle-accurate simulation says nothing about timing and is no sign-off.

Example:
  clockstride run counter.v --random 1 --cycles 1000000 --response counter.csv`,
    )
    .exitOverride();
  for (const verb of await verbsFor(process.argv[2] ?? '')) {
    command.addCommand(verb.exitOverride());
  }
  return command;
}

/** Does what the command line asks for, and sets the exit status. */
export async function main(): Promise<void> {
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === READER_GONE) process.exit(0);
    say(`error: standard output cannot be used: ${reason(error)}`);
    process.exit(WRONG_INPUT);
  });
  try {
    await (await program()).parseAsync();
  } catch (error) {
    process.exitCode = report(error);
  }
}

/** Tells what went wrong; returns the exit status. Throws what is no fault of the user's. */
function report(error: unknown): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : WRONG_INPUT;
  if (error instanceof InputError) printDiagnostics(error.diagnostics);
  else if (error instanceof UsageError || error instanceof FileError) say(error.message);
  else if (error instanceof RunFault) {
    const place = error.place === '' ? '' : `${error.place}: `;
    say(`${place}error: cycle ${error.completed} has no result: ${error.message}`);
  } else if (isSystemError(error)) {
    if (error.code === READER_GONE) return 0;
    say(`error: ${error.path ?? 'a file'} cannot be used: ${reason(error)}`);
  } else throw error;
  return WRONG_INPUT;
}

const say = (text: string): boolean => process.stderr.write(`${text}\n`);

const isSystemError = (error: unknown): error is NodeJS.ErrnoException =>
  error instanceof Error && 'syscall' in error;
