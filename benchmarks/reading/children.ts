import { spawn } from 'node:child_process';
import { text } from 'node:stream/consumers';
import { fileURLToPath } from 'node:url';

/** What a program has used from its start to its end. */
export interface Used {
  readonly seconds: number;
  /** Of all its threads, in user and in system mode. */
  readonly processorSeconds: number;
  /** The most memory that it had resident at a time. */
  readonly peakBytes: number;
}

/** What one reading of a netlist took, without the start of Node. */
export interface Reading {
  readonly seconds: number;
  readonly processorSeconds: number;
  readonly nets: number;
  readonly registers: number;
}

const pathOf = (path: string): string => fileURLToPath(new URL(path, import.meta.url));

/** The built command, which children run. */
export const builtCommand = pathOf('../../dist/compiler/cli/main.js');

/** Reads netlist files into a circuit in a process of its own. Throws an Error if that fails. */
export async function readApart(files: readonly string[]): Promise<Reading & { used: Used }> {
  const { used, stdout } = await runApart(pathOf('readOnce.mjs'), files);
  return { ...(JSON.parse(stdout) as Reading), used };
}

/** Runs the built command in a process of its own. Throws an Error if that fails. */
export async function runCommand(...args: readonly string[]): Promise<Used> {
  return (await runApart(builtCommand, args)).used;
}

/** Runs a program with Node in a process of its own. Throws an Error if that fails. */
export async function runApart(
  program: string,
  args: readonly string[],
): Promise<{ used: Used; stdout: string }> {
  const child = spawn(process.execPath, ['--import', pathOf('usage.mjs'), program, ...args], {
    stdio: ['ignore', 'pipe', 'pipe', 'pipe'],
  });
  const ended = new Promise<number | null>((resolve, reject) => {
    child.once('error', reject);
    child.once('close', resolve);
  });
  const pipes = [child.stdout!, child.stderr!, child.stdio[3] as NodeJS.ReadableStream];
  const [stdout, stderr, used] = await Promise.all(pipes.map((pipe) => text(pipe)));
  const status = await ended;
  if (status !== 0) throw new Error(`${program} ended with ${status}: ${stderr}`);
  return { used: JSON.parse(used!) as Used, stdout: stdout! };
}
