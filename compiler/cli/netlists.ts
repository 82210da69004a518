import { readFileSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { type Command, InvalidArgumentError } from 'commander';
import type { Circuit } from '../circuit/circuit.js';
import { type Diagnostic, Diagnostics, InputError } from '../diagnostics/diagnostics.js';
import { Source } from '../diagnostics/source.js';
import { readNetlist } from '../read/readNetlist.js';
import { includeReader } from '../read/verilog/includes.js';

/** The options that every verb which reads netlists has. */
export interface NetlistOptions {
  readonly top?: string;
  readonly define?: ReadonlyMap<string, string>;
  readonly include?: readonly string[];
  readonly replace?: ReadonlyMap<string, string>;
  readonly blackBox?: readonly string[];
}

/** Adds the netlist arguments and the options common to the verbs that read them. */
export function addNetlistOptions(command: Command): Command {
  return command
    .argument('<netlist...>', 'netlist files: .v Verilog, .lib Liberty, .bench the ISCAS form')
    .option('--top <name>', 'top module; the one that no other instantiates, unless given')
    .option('--define <name[=text]>', 'define a Verilog macro (repeatable)', addDefine)
    .option('--include <dir>', 'look for included files there too (repeatable)', addToList)
    .option(
      '--replace <name=file>',
      'take module NAME from this Verilog file, whatever others define (repeatable)',
      addReplacement,
    )
    .option(
      '--black-box <name>',
      'leave out what is inside module NAME: its outputs become inputs, its inputs outputs\n' +
        '(repeatable)',
      addToList,
    );
}

/** A circuit as read, and the warnings and notes that came with it. */
export interface LoadedCircuit {
  readonly circuit: Circuit;
  readonly found: readonly Diagnostic[];
}

/** Reads netlist files into one circuit. Throws `InputError` with all problems found. */
export async function loadCircuit(
  files: readonly string[],
  options: NetlistOptions,
): Promise<LoadedCircuit> {
  const diagnostics = new Diagnostics();
  const sources = await Promise.all(files.map((file) => readSource(file, diagnostics)));
  const replacements = new Map<string, Source>();
  for (const [name, file] of options.replace ?? []) {
    const source = await readSource(file, diagnostics);
    if (source !== undefined) replacements.set(name, source);
  }
  diagnostics.throwIfErrors();
  const circuit = readNetlist(
    sources.filter((source) => source !== undefined),
    {
      ...(options.top !== undefined && { top: options.top }),
      ...(options.define !== undefined && { defines: options.define }),
      ...(options.blackBox !== undefined && { blackBoxes: options.blackBox }),
      replacements,
      readInclude: includeReader(options.include ?? [], bytesOf),
    },
    diagnostics,
  );
  diagnostics.throwIfErrors();
  if (circuit === undefined) throw new InputError(diagnostics.list);
  return { circuit, found: diagnostics.list };
}

async function readSource(path: string, diagnostics: Diagnostics): Promise<Source | undefined> {
  try {
    return new Source(path, await readFile(path));
  } catch (error) {
    diagnostics.add('file-unreadable', `${path} cannot be read: ${reason(error)}`);
    return undefined;
  }
}

// Undefined where there is no such file: the next folder may have it, and the reader reports it
// if none has.
function bytesOf(path: string): Uint8Array | undefined {
  try {
    return readFileSync(path);
  } catch {
    return undefined;
  }
}

/** What the operating system said, in words. */
export function reason(error: unknown): string {
  const code = (error as NodeJS.ErrnoException).code;
  if (code === 'ENOENT') return 'there is no such file';
  if (code === 'EISDIR') return 'it is a directory';
  if (code === 'EACCES') return 'access is denied';
  return error instanceof Error ? error.message : String(error);
}

function addDefine(text: string, before: ReadonlyMap<string, string> = new Map()) {
  const [name, value] = text.split(/=(.*)/s);
  if (!/^[A-Za-z_][A-Za-z0-9_$]*$/.test(name ?? '')) {
    throw new InvalidArgumentError(`${name} is no macro name.`);
  }
  return new Map(before).set(name!, value ?? '');
}

function addReplacement(text: string, before: ReadonlyMap<string, string> = new Map()) {
  const [, name, file] = /^([^=]+)=(.+)$/.exec(text) ?? [];
  if (name === undefined || file === undefined) {
    throw new InvalidArgumentError('Give NAME=FILE.');
  }
  return new Map(before).set(name, file);
}

function addToList(text: string, before: readonly string[] = []): string[] {
  return [...before, text];
}
