import { type ChildProcessByStdio, spawn } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Readable, Writable } from 'node:stream';
import { text } from 'node:stream/consumers';
import { fileURLToPath } from 'node:url';
import { afterAll } from 'vitest';

/** The built command. */
export const command = fileURLToPath(new URL('../../dist/compiler/cli/main.js', import.meta.url));

/** Where commands keep what they have compiled, on systems that know XDG. */
export const cacheHome = mkdtempSync(join(tmpdir(), 'clockstride-cache-'));

const environment = { ...process.env, XDG_CACHE_HOME: cacheHome };

/** The command at work. */
export type Started = ChildProcessByStdio<null, Readable, Readable>;

/** The command at work, with a way to its standard input. */
export type StartedFed = ChildProcessByStdio<Writable, Readable, Readable>;

/** What a command that has ended left behind. */
export interface Outcome {
  /** Null where a signal ended it. */
  readonly status: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** A folder of its own in which the built command is run, as a user would; gone after the tests. */
export class WorkFolder {
  readonly path = mkdtempSync(join(tmpdir(), 'clockstride-cli-'));

  /** With some files in it, by name. */
  constructor(files: Readonly<Record<string, string>> = {}) {
    for (const [name, content] of Object.entries(files)) this.write(name, content);
    afterAll(() => rmSync(this.path, { recursive: true }));
  }

  /** Writes a file; returns its name. */
  write(name: string, content: string | Uint8Array): string {
    writeFileSync(join(this.path, name), content);
    return name;
  }

  /** The text of a file. */
  read(name: string): string {
    return readFileSync(join(this.path, name), 'utf8');
  }

  /** All names in the folder, hidden ones too, sorted. */
  names(): string[] {
    return readdirSync(this.path).sort();
  }

  /** Starts the built command in the folder. */
  start(...args: string[]): Started {
    return spawn(process.execPath, [command, ...args], {
      cwd: this.path,
      env: environment,
      stdio: ['ignore', 'pipe', 'pipe'],
    });
  }

  /** Starts the built command in the folder, to be fed. */
  startFed(...args: string[]): StartedFed {
    return spawn(process.execPath, [command, ...args], {
      cwd: this.path,
      env: environment,
      stdio: ['pipe', 'pipe', 'pipe'],
    });
  }

  /** Runs the built command in the folder to its end. */
  run(...args: string[]): Promise<Outcome> {
    return outcomeOf(this.start(...args));
  }
}

/** Waits for the end of a command. */
export async function outcomeOf(started: Started | StartedFed): Promise<Outcome> {
  const ended = new Promise<number | null>((resolve, reject) => {
    started.once('error', reject);
    started.once('close', resolve);
  });
  const [status, stdout, stderr] = await Promise.all([
    ended,
    text(started.stdout),
    text(started.stderr),
  ]);
  return { status, stdout, stderr };
}
