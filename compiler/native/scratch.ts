import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const SIGNALS = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;

/**
 * A temporary directory, and the processes that work in it. Both are gone after `close`, and also
 * when this process is ended by a signal or leaves early.
 */
export class Scratch {
  readonly path = mkdtempSync(join(tmpdir(), 'clockstride-'));
  readonly #children = new Set<ChildProcess>();
  readonly #onExit = () => this.close();
  readonly #onSignal = (signal: NodeJS.Signals) => {
    this.close();
    // Nobody else handles it: end by it, so that the caller sees why.
    if (process.listenerCount(signal) === 0) process.kill(process.pid, signal);
  };

  constructor() {
    process.once('exit', this.#onExit);
    for (const signal of SIGNALS) process.on(signal, this.#onSignal);
  }

  /** The path of a file in the directory. */
  file(name: string): string {
    return join(this.path, name);
  }

  /**
   * Runs a program to its end; returns what it wrote to stdout. Throws an Error with the beginning
   * of what it wrote to stderr if it cannot be started or fails.
   */
  run(command: readonly string[]): Promise<string> {
    const [program, ...args] = command;
    return new Promise((resolve, reject) => {
      const child = spawn(program!, args, {
        stdio: ['ignore', 'pipe', 'pipe'],
        env: { ...process.env, TMPDIR: this.path },
        // A group of its own: a compiler's parts are ended together with it.
        detached: true,
      });
      this.#children.add(child);
      const output = collect(child.stdout);
      const errors = collect(child.stderr);
      child.on('error', (error) => {
        this.#children.delete(child);
        reject(new Error(`${program} could not be started: ${error.message}`));
      });
      child.on('close', (status, signal) => {
        this.#children.delete(child);
        if (status === 0) resolve(output());
        else reject(new Error(failure(program!, status, signal, errors())));
      });
    });
  }

  /** Ends what still runs and removes the directory. */
  close(): void {
    process.off('exit', this.#onExit);
    for (const signal of SIGNALS) process.off(signal, this.#onSignal);
    for (const { pid } of this.#children) if (pid !== undefined) endGroup(pid);
    rmSync(this.path, { recursive: true, force: true, maxRetries: 3 });
  }
}

function collect(stream: NodeJS.ReadableStream): () => string {
  const parts: string[] = [];
  stream.setEncoding('utf8');
  stream.on('data', (part: string) => parts.push(part));
  return () => parts.join('');
}

const MOST_LINES = 5;

function failure(
  program: string,
  status: number | null,
  signal: NodeJS.Signals | null,
  errors: string,
): string {
  const how = signal === null ? `failed with status ${status}` : `was ended by ${signal}`;
  const said = errors.trim().split('\n').slice(0, MOST_LINES).join('\n');
  return said === '' ? `${program} ${how}` : `${program} ${how}:\n${said}`;
}

function endGroup(leader: number): void {
  try {
    process.kill(-leader, 'SIGKILL');
  } catch {
    // It has ended by itself meanwhile.
  }
}
