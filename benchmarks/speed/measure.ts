import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { benchPicture } from '../../compiler/report/bench/benchPicture.js';
import type { BenchSuite } from '../../compiler/report/bench/suite.js';
import { suiteText } from '../../compiler/report/bench/suiteText.js';
import { netlists } from './netlists.js';
import { measuredSuite } from './runBench.js';

/**
 * Measures generated code beside the interpreters and native C on our own circuits and on the
 * published ones, where their folder stands beside the project, and writes `benchmarks/results`:
 * `speed.json`, which `check.ts` compares with, `speed.md` and `speed.svg`.
 *
 *   npm run build && npx tsx benchmarks/speed/measure.ts
 */

const SECONDS = 1;

const results = fileURLToPath(new URL('../results/', import.meta.url));

function page(suite: BenchSuite): string {
  return [
    '# Speed of generated code',
    '',
    'Made by `npm run build && npx tsx benchmarks/speed/measure.ts`. All engines read a stimulus row',
    'and write a response row in every cycle, and their responses are compared before anything is',
    'measured. The machine may do other work as well: ratios are of best bursts, taken in turn, while',
    'times to build and to the first answer are longer the higher the load. Native is straight-line',
    'C of the same netlist under `cc -O2`, with a compiler barrier after each cycle. The table is',
    'another algorithm: it looks up what has come before.',
    '',
    '![speed over native C](speed.svg)',
    '',
    '```',
    suiteText(suite),
    '```',
    '',
  ].join('\n');
}

const folder = mkdtempSync(join(tmpdir(), 'clockstride-speed-'));
try {
  const suite = measuredSuite(netlists(folder), SECONDS);
  writeFileSync(join(results, 'speed.json'), `${JSON.stringify(suite, null, 2)}\n`);
  writeFileSync(join(results, 'speed.md'), page(suite));
  if (suite.means.straightLine !== undefined) {
    writeFileSync(join(results, 'speed.svg'), benchPicture(suite));
  }
  process.stdout.write(`${suiteText(suite)}\n`);
} finally {
  rmSync(folder, { recursive: true });
}
