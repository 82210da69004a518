#!/usr/bin/env node
import { Command, CommanderError } from 'commander';
import { RunFault } from '../../runtime/engine.js';
import { TableError } from '../../runtime/node/index.js';
import { InputError } from '../diagnostics/diagnostics.js';
import { benchCommand } from './bench.js';
import { inspectCommand } from './inspect.js';
import { reason } from './netlists.js';
import { printDiagnostics } from './printDiagnostics.js';
import { runCommand } from './run.js';
import { settleCommand } from './settle.js';
import { UsageError } from './usageError.js';
import { version } from './version.js';

/** Exit status for a request or an input that is wrong. */
const WRONG_INPUT = 2;

function program(): Command {
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
  for (const verb of [inspectCommand(), runCommand(), settleCommand(), benchCommand()]) {
    command.addCommand(verb.exitOverride());
  }
  return command;
}

async function main(): Promise<void> {
  // A reader that has seen enough, such as `head`, is no failure.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') process.exit(0);
    throw error;
  });
  try {
    await program().parseAsync();
  } catch (error) {
    process.exitCode = report(error);
  }
}

/** Tells what went wrong; returns the exit status. Throws what is no fault of the user's. */
function report(error: unknown): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : WRONG_INPUT;
  if (error instanceof InputError) printDiagnostics(error.diagnostics);
  else if (error instanceof UsageError || error instanceof TableError) say(error.message);
  else if (error instanceof RunFault) {
    const place = error.place === '' ? '' : `${error.place}: `;
    say(`${place}error: cycle ${error.completed} has no result: ${error.message}`);
  } else if (isSystemError(error)) {
    say(`error: ${error.path ?? 'a file'} cannot be used: ${reason(error)}`);
  } else throw error;
  return WRONG_INPUT;
}

const say = (text: string): boolean => process.stderr.write(`${text}\n`);

const isSystemError = (error: unknown): error is NodeJS.ErrnoException =>
  error instanceof Error && 'syscall' in error;

await main();
