import { copyFileSync, mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build as esbuild } from 'esbuild';
import { build as vite } from 'vite';

const app = fileURLToPath(new URL('app/', import.meta.url));

/** Builds the app with Vite, as it comes, against a package. */
export async function buildWithVite(pack: string, outDir: string): Promise<void> {
  await vite({
    configFile: false,
    root: app,
    base: './',
    logLevel: 'error',
    resolve: { alias: { 'packed-lock': join(pack, 'model.mjs') } },
    build: { outDir, emptyOutDir: true },
  });
}

/** Bundles the app with esbuild; what the README of a package says to copy stands beside. */
export async function buildWithEsbuild(pack: string, outDir: string): Promise<void> {
  mkdirSync(outDir, { recursive: true });
  const { warnings } = await esbuild({
    entryPoints: [join(app, 'main.mjs')],
    outfile: join(outDir, 'main.js'),
    alias: { 'packed-lock': join(pack, 'model.mjs') },
    bundle: true,
    format: 'esm',
    logLevel: 'silent',
  });
  if (warnings.length > 0) throw new Error(warnings.map(({ text }) => text).join('\n'));
  for (const file of ['model.wasm', 'model.mjs', 'worker.mjs']) {
    copyFileSync(join(pack, file), join(outDir, file));
  }
  const page = '<!doctype html><title>app</title><script type="module" src="main.js"></script>';
  writeFileSync(join(outDir, 'index.html'), page);
}
