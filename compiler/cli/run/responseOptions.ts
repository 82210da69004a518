import { existsSync, statSync } from 'node:fs';
import { type Command, InvalidArgumentError, Option } from 'commander';
import { isCompressed } from '../../../runtime/node/fileForm.js';
import { formOf, ResponseChooser, STANDARD } from '../../../runtime/node/index.js';
import type { Design } from '../../compile.js';
import { recordedResponse } from '../../record/recordedResponse.js';
import type { OutletPlan } from '../../run/outlets/outlet.js';
import { signResponse } from '../../run/outlets/signResponse.js';
import { writeResponse } from '../../run/outlets/writeResponse.js';
import { positiveArgument } from '../numbers.js';
import { UsageError } from '../usageError.js';

/** Where the response goes. */
export interface ResponseOptions {
  readonly response?: string;
  readonly responseForm?: 'csv' | 'packed';
  readonly ports?: readonly string[];
  readonly every?: number;
  readonly changes?: true;
  readonly signature?: true;
  readonly expectSignature?: string;
}

/** Adds the options that say what becomes of the response. */
export function addResponseOptions(command: Command): Command {
  return command
    .option(
      '--response <file>',
      'write the outputs of every cycle: CSV, packed rows where the file ends in .rows,\n' +
        'compressed where .gz follows; - for standard output',
    )
    .addOption(
      new Option('--response-form <form>', 'the form, where no ending tells it').choices([
        'csv',
        'packed',
      ]),
    )
    .option('--ports <name,...>', 'with --response: only these ports, in this order', addNames)
    .option('--every <n>', 'with --response: only cycles 0, N, 2N and so on', positiveArgument)
    .option('--changes', 'with --response: only rows that differ from the one before')
    .option('--signature', 'print the CRC-64 of the response')
    .option(
      '--expect-signature <digits>',
      'compare the signature with this one',
      signatureArgument,
    );
}

/**
 * The outlets that keep a response, or what is left of it; `mark` is that of the record, if the run
 * is recorded. Throws UsageError for ports that the circuit lacks, and for a file of another form.
 */
export function responseOutlets(
  options: ResponseOptions,
  { layout }: Design,
  mark?: string,
): OutletPlan[] {
  const { expectSignature } = options;
  const isSigned = options.signature || expectSignature !== undefined;
  const outlets = isSigned ? [signResponse(expectSignature)] : [];
  const { response, responseForm, ports, every, changes } = options;
  if (response === undefined) {
    refuseAlone({ ports, every, changes, responseForm });
    return outlets;
  }
  const form = responseForm ?? formOf(response);
  if (form !== 'csv' && form !== 'packed') {
    throw new UsageError(`error: --response ${response}: a response is CSV or packed rows (.rows)`);
  }
  const choice = {
    ...(ports && { ports }),
    ...(every !== undefined && { every }),
    ...(changes && { changes }),
  };
  try {
    new ResponseChooser(layout, choice);
  } catch (error) {
    if (error instanceof RangeError) throw new UsageError(`error: --ports: ${error.message}`);
    throw error;
  }
  if (mark === undefined) return [...outlets, writeResponse(response, { ...choice, form })];
  refusePassing(response);
  return [...outlets, recordedResponse(response, { ...choice, form, mark })];
}

// What is compressed or read as it is written cannot be gone on with.
function refusePassing(response: string): void {
  const isPlain = !existsSync(response) || statSync(response).isFile();
  if (response !== STANDARD && isPlain && !isCompressed(response)) return;
  throw new UsageError(
    `error: --record needs a plain file for the response, not compressed and no pipe: ${response}`,
  );
}

// An option that would change nothing is most likely a mistake.
function refuseAlone(options: Readonly<Record<string, unknown>>): void {
  const name = Object.keys(options).find((key) => options[key] !== undefined);
  if (name === undefined) return;
  const option = name.replace(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`);
  throw new UsageError(`error: --${option} is for --response FILE, which is missing`);
}

function signatureArgument(text: string): string {
  const [, digits] = /^(?:0x)?([0-9a-f]{16})$/i.exec(text) ?? [];
  if (digits !== undefined) return digits;
  throw new InvalidArgumentError('Give the sixteen hexadecimal digits that --signature prints.');
}

function addNames(text: string, before: readonly string[] = []): string[] {
  return [...before, ...text.split(',').map((name) => name.trim())];
}
