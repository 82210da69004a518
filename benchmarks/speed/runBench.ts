import { execFileSync } from 'node:child_process';
import { basename } from 'node:path';
import { fileURLToPath } from 'node:url';
import { thisMachine } from '../../compiler/report/bench/machine.js';
import type { BenchSuite } from '../../compiler/report/bench/suite.js';
import { benchSuite } from '../../compiler/report/bench/suite.js';
import type { BenchResult } from '../../compiler/report/benchResult.js';

const command = fileURLToPath(new URL('../../dist/compiler/cli/main.js', import.meta.url));

/** Measures a netlist by the built command, in a process of its own. */
export function measured(file: string, seconds: number): BenchResult {
  process.stderr.write(`${basename(file)}\n`);
  const args = [command, 'bench', file, '--json', '--seconds', String(seconds)];
  const text = execFileSync(process.execPath, args, {
    encoding: 'utf8',
    stdio: ['ignore', 'pipe', 'ignore'],
  });
  return JSON.parse(text) as BenchResult;
}

/** Measures netlists one after another. */
export const measuredSuite = (files: readonly string[], seconds: number): BenchSuite => {
  const results = files.map((file) => measured(file, seconds));
  return benchSuite(thisMachine(), results);
};
