// Joins the modules of the command, so that it starts sooner; see compiler/cli/main.ts. Folders are
// as deep as in `dist/compiler`, because modules look for files from where they stand.
import { readdirSync, rmSync } from 'node:fs';
import { basename, join } from 'node:path';
import { build } from 'esbuild';

const root = new URL('..', import.meta.url).pathname;
const outdir = 'dist/joined/command';

const { metafile } = await build({
  absWorkingDir: root,
  entryPoints: [
    'compiler/cli/command.ts',
    'compiler/emit/emitWorker.ts',
    'compiler/background/compileWorker.ts',
  ],
  entryNames: '[name]',
  outdir,
  bundle: true,
  splitting: true,
  metafile: true,
  minifyWhitespace: true,
  minifySyntax: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  packages: 'external',
  charset: 'utf8',
  legalComments: 'none',
  logLevel: 'warning',
});

// Parts are named by what is in them, so those of earlier builds would stay.
const made = new Set(Object.keys(metafile.outputs).map((path) => basename(path)));
for (const name of readdirSync(join(root, outdir))) {
  if (!made.has(name)) rmSync(join(root, outdir, name), { force: true });
}
