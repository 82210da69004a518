import { readFileSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { type Command, InvalidArgumentError } from 'commander';
import type { Circuit } from '../circuit/circuit.js';
import { type CompileOptions, type Design, designOf } from '../compile.js';
import { type Diagnostic, Diagnostics, InputError } from '../diagnostics/diagnostics.js';
import { Source } from '../diagnostics/source.js';
import { readNetlist } from '../read/readNetlist.js';
import { printDiagnostics } from './printDiagnostics.js';

/** The options that every verb which reads netlists has. */
export interface NetlistOptions {
  readonly top?: string;
  readonly define?: ReadonlyMap<string, string>;
  readonly include?: readonly string[];
}

/** Adds the netlist arguments and the options common to the verbs that read them. */
export function addNetlistOptions(command: Command): Command {
  return command
    .argument('<netlist...>', 'netlist files: .v Verilog, .bench the ISCAS text form')
    .option('--top <name>', 'top module; the one that no other instantiates, unless given')
    .option('--define <name[=text]>', 'define a Verilog macro (repeatable)', addDefine)
    .option('--include <dir>', 'look for included files there too (repeatable)', addToList);
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
  diagnostics.throwIfErrors();
  const circuit = readNetlist(
    sources.filter((source) => source !== undefined),
    {
      ...(options.top !== undefined && { top: options.top }),
      ...(options.define !== undefined && { defines: options.define }),
      readInclude: (path, from) => readIncluded(path, from, options.include ?? []),
    },
    diagnostics,
  );
  diagnostics.throwIfErrors();
  if (circuit === undefined) throw new InputError(diagnostics.list);
  return { circuit, found: diagnostics.list };
}

/** Reads netlists into a design and prints what reading had to say on stderr. */
export async function loadDesign(
  files: readonly string[],
  options: NetlistOptions,
  compile: CompileOptions = {},
): Promise<Design> {
  const { circuit, found } = await loadCircuit(files, options);
  printDiagnostics(found);
  return designOf(circuit, compile);
}

async function readSource(path: string, diagnostics: Diagnostics): Promise<Source | undefined> {
  try {
    return new Source(path, await readFile(path));
  } catch (error) {
    diagnostics.add('file-unreadable', `${path} cannot be read: ${reason(error)}`);
    return undefined;
  }
}

// Relative to the file that includes it first, then in the directories of --include.
function readIncluded(
  path: string,
  from: Source,
  directories: readonly string[],
): Source | undefined {
  for (const directory of [dirname(from.path), ...directories]) {
    const candidate = join(directory, path);
    try {
      return new Source(candidate, readFileSync(candidate));
    } catch {
      // Not in this directory: the next one may have it, and the reader reports if none has.
    }
  }
  return undefined;
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

function addToList(text: string, before: readonly string[] = []): string[] {
  return [...before, text];
}
