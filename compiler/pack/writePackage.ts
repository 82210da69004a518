import {
  chmodSync,
  existsSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  realpathSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { basename, dirname, join, relative, resolve } from 'node:path';
import { makeFolder, removeFolders } from '../report/makeFolder.js';
import { isManifest } from './manifest.js';

/** Thrown where a folder cannot take a package; nothing has been changed. */
export class FolderRefused extends Error {}

/** A folder being filled beside the one that it will replace. */
export class PackageFolder {
  readonly path: string;
  readonly #target: string;
  readonly #foreign: () => string | undefined;
  /** Folders that were made for it. */
  readonly #made: readonly string[];
  readonly #onExit = (): void => this.discard();

  /**
   * Begins a package. The target may be absent, empty or an earlier package. Throws
   * `FolderRefused` for one that holds anything else, and what the file system throws.
   */
  static begin(target: string): PackageFolder {
    const whole = existsSync(target) ? realpathSync(target) : resolve(target);
    const reason = refusal(whole);
    if (reason !== undefined) throw new FolderRefused(`${target} ${reason}`);
    const made = makeFolder(dirname(whole));
    try {
      return new PackageFolder(whole, target, made);
    } catch (error) {
      removeFolders(made);
      throw error;
    }
  }

  private constructor(target: string, name: string, made: readonly string[]) {
    this.#target = target;
    this.#made = made;
    this.#foreign = () => {
      const reason = refusal(target);
      return reason && `${name} ${reason}`;
    };
    this.path = mkdtempSync(join(dirname(target), `.${basename(target)}.partial-`));
    // A temporary folder is for its owner alone; a package is like any other folder.
    chmodSync(this.path, 0o777 & ~process.umask());
    process.once('exit', this.#onExit);
  }

  /** Writes a file of the package. */
  write(name: string, content: string | Uint8Array): void {
    try {
      writeFileSync(join(this.path, name), content);
    } catch (error) {
      throw Object.assign(error as Error, { path: join(this.#target, name) });
    }
  }

  /**
   * Puts the folder in the place of the target, all at once, and does what belongs to it; where that
   * throws, what was there before is as it was.
   */
  finish(last: () => void = () => {}): void {
    const reason = this.#foreign();
    if (reason !== undefined) throw new FolderRefused(reason);
    const old = `${this.path}-old`;
    const isReplaced = existsSync(this.#target);
    if (isReplaced) renameSync(this.#target, old);
    try {
      renameSync(this.path, this.#target);
    } catch (error) {
      if (isReplaced) renameSync(old, this.#target);
      throw error;
    }
    try {
      last();
    } catch (error) {
      renameSync(this.#target, this.path);
      if (isReplaced) renameSync(old, this.#target);
      throw error;
    }
    rmSync(old, { recursive: true, force: true });
  }

  /** Takes away what has been written, unless it has been put in place. */
  discard(): void {
    process.off('exit', this.#onExit);
    rmSync(this.path, { recursive: true, force: true });
    removeFolders(this.#made);
  }
}

/** Why a folder cannot be replaced; undefined where it can. */
function refusal(target: string): string | undefined {
  if (!relative(target, process.cwd()).startsWith('..')) {
    return 'is the folder you are in, or one around it; name another one';
  }
  if (!existsSync(target)) return undefined;
  if (!statSync(target).isDirectory()) return 'is no folder';
  const names = readdirSync(target);
  if (names.length === 0) return undefined;
  const own = ownFiles(join(target, 'manifest.json'));
  if (own === undefined) return 'holds other files and no package; name another folder or empty it';
  const foreign = names.find((name) => !own.has(name));
  return foreign && `holds ${foreign}, which is no part of the package there; move it away`;
}

/** The files of a package; undefined where there is none. */
function ownFiles(manifest: string): ReadonlySet<string> | undefined {
  try {
    const content: unknown = JSON.parse(readFileSync(manifest, 'utf8'));
    return isManifest(content)
      ? new Set(['manifest.json', ...Object.keys(content.files)])
      : undefined;
  } catch {
    return undefined;
  }
}
