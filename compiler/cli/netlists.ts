import { existsSync, readFileSync, statSync } from 'node:fs';
import { readFile, stat } from 'node:fs/promises';
import { dirname } from 'node:path';
import { promisify } from 'node:util';
import { gunzip } from 'node:zlib';
import { type Command, InvalidArgumentError } from 'commander';
import type { NetlistCache } from '../cache/netlistCache.js';
import type { Circuit } from '../circuit/circuit.js';
import { type Diagnostic, Diagnostics, InputError } from '../diagnostics/diagnostics.js';
import { Source } from '../diagnostics/source.js';
import { readNetlist } from '../read/readNetlist.js';
import { includeReader } from '../read/verilog/includes.js';
import { countArgument } from './numbers.js';

/** The options that every verb which reads netlists has. */
export interface NetlistOptions {
  readonly top?: string;
  readonly define?: ReadonlyMap<string, string>;
  readonly include?: readonly string[];
  readonly replace?: ReadonlyMap<string, string>;
  readonly blackBox?: readonly string[];
  /** See `NetlistReadOptions`. */
  readonly memoriesFrom?: number;
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
    )
    .option(
      '--memories-from <bits>',
      'hold Verilog arrays of at least so many bits as memories, and smaller ones as registers\n' +
        '(default: 257)',
      countArgument,
    );
}

/** A file that was read. */
export interface ReadFile {
  readonly path: string;
  readonly bytes: Uint8Array;
}

/** A circuit as read, the warnings and notes that came with it, and the files that it is made of. */
export interface LoadedCircuit {
  readonly circuit: Circuit;
  readonly found: readonly Diagnostic[];
  readonly files: readonly ReadFile[];
  /** What a cache tells the circuit by, if there is one. */
  readonly id?: string;
}

/** How a circuit is found that has been read before. */
export interface LoadOptions {
  readonly cache?: NetlistCache | undefined;
  /** Called where it has to be read. */
  readonly onReading?: () => void;
}

/**
 * Reads netlist files into one circuit, or finds it in a cache. Throws `InputError` with all problems
 * found.
 */
export async function loadCircuit(
  files: readonly string[],
  options: NetlistOptions,
  { cache, onReading }: LoadOptions = {},
): Promise<LoadedCircuit> {
  const diagnostics = new Diagnostics();
  const sources = await Promise.all(files.map((file) => readSource(file, diagnostics)));
  const replacements = new Map<string, Source>();
  for (const [name, file] of options.replace ?? []) {
    const source = await readSource(file, diagnostics);
    if (source !== undefined) replacements.set(name, source);
  }
  diagnostics.throwIfErrors();
  const named: ReadFile[] = sources.filter((source) => source !== undefined);
  named.push(...replacements.values());
  const told = {
    ...(options.top !== undefined && { top: options.top }),
    ...(options.define !== undefined && { defines: options.define }),
    ...(options.blackBox !== undefined && { blackBoxes: options.blackBox }),
    ...(options.memoriesFrom !== undefined && { memoriesFrom: options.memoriesFrom }),
  };
  const { include = [], replace } = options;
  const request = { named, options: { ...told, include, replace } };
  const known = cache?.find(request, bytesIfAny);
  if (known !== undefined) return { ...known, files: [...named, ...known.included] };
  onReading?.();
  const looked: LookedUp[] = [];
  const bytesOf = (path: string): Uint8Array | undefined => {
    const bytes = bytesIfAny(path);
    looked.push({ path, bytes });
    return bytes;
  };
  const circuit = readNetlist(
    sources.filter((source) => source !== undefined),
    { ...told, replacements, readInclude: includeReader(include, bytesOf) },
    diagnostics,
  );
  diagnostics.throwIfErrors();
  if (circuit === undefined) throw new InputError(diagnostics.list);
  const found = diagnostics.list;
  const read = [...named, ...looked.filter((file): file is ReadFile => file.bytes !== undefined)];
  const id = cache?.keep(request, looked, { circuit, found });
  return { circuit, found, files: read, ...(id !== undefined && { id }) };
}

/** A file that was looked for. */
interface LookedUp {
  readonly path: string;
  readonly bytes: Uint8Array | undefined;
}

async function readSource(path: string, diagnostics: Diagnostics): Promise<Source | undefined> {
  try {
    // A device such as /dev/zero may have no end.
    if ((await stat(path)).isCharacterDevice()) {
      diagnostics.add('file-unreadable', `${path} cannot be read: it is a device, not a file`);
      return undefined;
    }
    const bytes = await readFile(path);
    return new Source(path, /\.gz$/i.test(path) ? await unpack(bytes) : bytes);
  } catch (error) {
    diagnostics.add('file-unreadable', `${path} cannot be read: ${reason(error)}`);
    return undefined;
  }
}

const unpack = promisify(gunzip);

// Undefined where there is no such file: the next folder may have it, and the reader reports it
// if none has.
function bytesIfAny(path: string): Uint8Array | undefined {
  try {
    return statSync(path).isFile() ? readFileSync(path) : undefined;
  } catch {
    return undefined;
  }
}

/** What the operating system said, in words. */
export function reason(error: unknown): string {
  const { code, path } = error as NodeJS.ErrnoException;
  const folder = dirname(path ?? '');
  if (code === 'ENOENT') {
    return existsSync(folder) ? 'there is no such file' : `there is no folder ${folder}`;
  }
  if (code === 'ENOTDIR') return `${folder} is no folder`;
  if (code === 'EEXIST') return 'there is a file of that name';
  if (code === 'EISDIR') return 'it is a directory';
  if (code === 'EACCES') return 'access is denied';
  if (code === 'ENOSPC') return 'no space is left for it';
  if (code === 'Z_DATA_ERROR' || code === 'Z_BUF_ERROR') return 'it is no whole gzip file';
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
