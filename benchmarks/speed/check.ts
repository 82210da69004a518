import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { BenchSuite } from '../../compiler/report/bench/suite.js';
import type { BenchResult } from '../../compiler/report/benchResult.js';
import { type Fallen, fallen, fallenText, TOLERANCE } from './fallen.js';
import { netlists } from './netlists.js';
import { measured } from './runBench.js';

/**
 * Fails, with status 1, where a ratio of speeds has fallen by more than the tolerance from the one
 * in `benchmarks/results/speed.json`. A circuit is measured again before it counts: the ratio must
 * have fallen each time.
 *
 *   npm run build && npx tsx benchmarks/speed/check.ts
 */

const SECONDS = 0.5;
const TRIES = 3;

const record = fileURLToPath(new URL('../results/speed.json', import.meta.url));

if (existsSync(record)) check(JSON.parse(readFileSync(record, 'utf8')) as BenchSuite);
else {
  process.stderr.write(`there is no ${record}; npx tsx benchmarks/speed/measure.ts makes it\n`);
  process.exitCode = 2;
}

function check({ circuits }: BenchSuite): void {
  const folder = mkdtempSync(join(tmpdir(), 'clockstride-speed-'));
  try {
    const files = netlists(folder);
    const found = circuits.flatMap((recorded) => {
      const file = files.find(
        (name) => basename(name).replace(/\.[^.]*$/, '') === recorded.circuit,
      );
      if (file !== undefined) return stillFallen(file, recorded);
      process.stderr.write(`${recorded.circuit} is not there and not measured\n`);
      return [];
    });
    for (const each of found) process.stdout.write(`${fallenText(each)}\n`);
    const percent = TOLERANCE * 100;
    if (found.length > 0) process.exitCode = 1;
    else process.stdout.write(`no ratio has fallen by more than ${percent} %\n`);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

// What has fallen in every try, as it was in the last.
function stillFallen(file: string, recorded: BenchResult): Fallen[] {
  let found = fallen(recorded, measured(file, SECONDS));
  for (let tries = 1; tries < TRIES && found.length > 0; tries++) {
    const again = fallen(recorded, measured(file, SECONDS));
    found = again.filter((a) => found.some((b) => a.of === b.of && a.over === b.over));
  }
  return found;
}
