import { execFile } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import type { TestProject } from 'vitest/node';

declare module 'vitest' {
  interface ProvidedContext {
    /** What the compiler of the project's own sources had to complain about. */
    buildProblem: string;
  }
}

const pathOf = (path: string) => fileURLToPath(new URL(`../../${path}`, import.meta.url));

/**
 * Builds `dist/` once before all tests, so that what they start is what the sources say. Gives them
 * a folder for temporary files and takes it away when all is over.
 *
 * A failure is handed to the one test that asks for it, so that it fails no other.
 */
export default async function build({ provide }: TestProject): Promise<() => void> {
  const temporary = mkdtempSync(join(tmpdir(), 'clockstride-tests-'));
  process.env.TMPDIR = temporary;
  const cache = pathOf('node_modules/.cache/');
  const memory = `${cache}clockstride.tsbuildinfo`;
  mkdirSync(cache, { recursive: true });
  // What is remembered of a build that is gone would keep it from being made again.
  if (!existsSync(pathOf('dist/compiler/cli/main.js'))) rmSync(memory, { force: true });
  const project = ['-p', pathOf('.ci/tsconfig.build.json')];
  const incremental = ['--incremental', '--tsBuildInfoFile', memory];
  const args = [pathOf('node_modules/typescript/bin/tsc'), ...project, ...incremental];
  try {
    await promisify(execFile)(process.execPath, args);
    // Last: joined modules that are older than the others are not used.
    await promisify(execFile)(process.execPath, [pathOf('.ci/bundle-package.mjs')]);
    provide('buildProblem', '');
  } catch (error) {
    const { stdout, message } = error as { stdout?: string; message: string };
    provide('buildProblem', stdout || message);
  }
  return () => rmSync(temporary, { recursive: true, force: true });
}
