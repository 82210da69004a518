import { spawnSync } from 'node:child_process';
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const root = new URL('../..', import.meta.url).pathname;

/**
 * Builds `runtime/index.ts` as the project's build does, into a folder; returns the folder of
 * `index.js`. The types of Node are out of reach, so that a use of them is an error.
 */
export function buildRuntime(folder: string): string {
  mkdirSync(folder, { recursive: true });
  const config = join(folder, 'tsconfig.json');
  writeFileSync(
    config,
    JSON.stringify({
      extends: join(root, 'tsconfig.build.json'),
      compilerOptions: { outDir: folder, types: [] },
      files: [join(root, 'runtime/index.ts')],
      include: [],
    }),
  );
  const tsc = join(root, 'node_modules/typescript/bin/tsc');
  const { status, stdout, stderr } = spawnSync(process.execPath, [tsc, '-p', config], {
    encoding: 'utf8',
  });
  if (status !== 0) throw new Error(`the runtime does not build:\n${stdout}${stderr}`);
  return join(folder, 'runtime');
}
