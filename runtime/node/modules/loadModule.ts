import { execFile } from 'node:child_process';
import { accessSync } from 'node:fs';
import { resolve } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { promisify } from 'node:util';
import { FileError, TableError } from '../tableError.js';

/** A module of the user's: what it exports, and a way to tell where in it something went wrong. */
export class UserModule {
  readonly path: string;
  readonly exports: Readonly<Record<string, unknown>>;
  readonly #url: string;

  private constructor(path: string, url: string, exports: Readonly<Record<string, unknown>>) {
    this.path = path;
    this.#url = url;
    this.exports = exports;
  }

  /**
   * Loads a module. Throws `FileError` where it cannot be run to its end, and what the file system
   * throws where it is not there.
   */
  static async load(path: string): Promise<UserModule> {
    accessSync(path);
    const url = pathToFileURL(resolve(path)).href;
    try {
      return new UserModule(path, url, (await import(url)) as Record<string, unknown>);
    } catch (error) {
      throw (await syntaxError(path, error)) ?? placed(path, url, error);
    }
  }

  /** The function that the module exports by default. Throws `FileError` where there is none. */
  main(): (...parameters: unknown[]) => unknown {
    const { default: main } = this.exports;
    if (typeof main === 'function') return main as (...parameters: unknown[]) => unknown;
    throw this.refusal(`expected a function as default export, got ${typeof main}`);
  }

  /** What the module threw, with its place in it, and with `when` in front. */
  error(thrown: unknown, when: string): FileError {
    return placed(this.path, this.#url, thrown, `${when}: `);
  }

  /** Says what is wrong with what the module gave. */
  refusal(reason: string): FileError {
    return new FileError(this.path, reason);
  }
}

// The error of an import does not tell where its syntax is wrong, but a check of the file does: its
// place, the line, and a caret below.
async function syntaxError(path: string, error: unknown): Promise<FileError | undefined> {
  if (!(error instanceof SyntaxError)) return undefined;
  const told = await promisify(execFile)(process.execPath, ['--check', path]).then(
    () => '',
    ({ stderr }: { stderr?: string }) => stderr ?? '',
  );
  const [, line, before] = /^.*:(\d+)\n.*\n( *)\^/.exec(told) ?? [];
  if (line === undefined || before === undefined) return undefined;
  return new TableError(path, Number(line), before.length + 1, error.message);
}

function placed(path: string, url: string, thrown: unknown, before = ''): FileError {
  const { stack = '', message = String(thrown) } = (thrown ?? {}) as Partial<Error>;
  const reason = `${before}${message}`;
  // Some loaders name the file in place of its address.
  for (const name of [url, fileURLToPath(url)]) {
    const start = stack.indexOf(`${name}:`);
    const place = start < 0 ? null : /^:(\d+)(?::(\d+))?/.exec(stack.slice(start + name.length));
    if (place) return new TableError(path, Number(place[1]), Number(place[2] ?? 1), reason);
  }
  return new FileError(path, reason);
}
