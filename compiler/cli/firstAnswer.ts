import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { FirstAnswer } from '../report/benchResult.js';
import type { ClockOptions } from './clockOption.js';
import type { NetlistOptions } from './netlists.js';

/** Runs of each kind, of which the median counts. */
const RUNS = 3;

/**
 * Measures how long the command takes for a run of one cycle, with and without its cache, each time
 * in a process of its own. Undefined where sources are run that have not been built, and where a
 * run fails.
 */
export async function firstAnswer(
  files: readonly string[],
  options: NetlistOptions & ClockOptions,
): Promise<FirstAnswer | undefined> {
  const command = fileURLToPath(new URL('../../compiler/cli/main.js', import.meta.url));
  if (import.meta.url.endsWith('.ts') || !existsSync(command)) return undefined;
  const cacheHome = mkdtempSync(join(tmpdir(), 'clockstride-bench-'));
  const environment = { ...process.env, XDG_CACHE_HOME: cacheHome };
  const run = ['run', ...files, ...argumentsOf(options), '--random', '1', '--signature'];
  const time = (...more: readonly string[]): Promise<number | undefined> =>
    timed([command, ...run, ...more], environment);
  try {
    // Long enough for the module to be kept as well.
    const filling = await time('--cycles', '100000');
    if (filling === undefined) return undefined;
    const coldMs = await medianOf(() => time('--cycles', '1', '--no-cache'));
    const cachedMs = await medianOf(() => time('--cycles', '1'));
    return coldMs === undefined || cachedMs === undefined ? undefined : { coldMs, cachedMs };
  } finally {
    rmSync(cacheHome, { recursive: true });
  }
}

/** The options of a netlist as they would be written on the command line. */
export function argumentsOf(options: NetlistOptions & ClockOptions): string[] {
  const { top, define, include, replace, blackBox, memoriesFrom, clock } = options;
  return [
    ...(top === undefined ? [] : ['--top', top]),
    ...[...(define ?? [])].flatMap(([name, text]) => ['--define', `${name}=${text}`]),
    ...(include ?? []).flatMap((folder) => ['--include', folder]),
    ...[...(replace ?? [])].flatMap(([name, file]) => ['--replace', `${name}=${file}`]),
    ...(blackBox ?? []).flatMap((name) => ['--black-box', name]),
    ...(memoriesFrom === undefined ? [] : ['--memories-from', String(memoriesFrom)]),
    ...(clock ?? []).flatMap(({ port, period, offset }) => [
      '--clock',
      `${port}=${period}@${offset}`,
    ]),
  ];
}

async function medianOf(measure: () => Promise<number | undefined>): Promise<number | undefined> {
  const times: number[] = [];
  for (let i = 0; i < RUNS; i++) {
    const time = await measure();
    if (time === undefined) return undefined;
    times.push(time);
  }
  return Number(times.sort((a, b) => a - b)[RUNS >> 1]!.toPrecision(4));
}

function timed(
  args: readonly string[],
  environment: NodeJS.ProcessEnv,
): Promise<number | undefined> {
  const start = performance.now();
  const child = spawn(process.execPath, args, { env: environment, stdio: 'ignore' });
  return new Promise((resolve) => {
    child.once('error', () => resolve(undefined));
    child.once('close', (status) => resolve(status === 0 ? performance.now() - start : undefined));
  });
}
