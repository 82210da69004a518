// Joins the runtime of model packages and of the one-file page into the texts that `pack` writes: the command needs no
// bundler when it runs. Other modules of the worker stand in `model.mjs`.
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { build } from 'esbuild';

const root = new URL('..', import.meta.url).pathname;

const shared = {
  name: 'model',
  setup: ({ onResolve }) => {
    onResolve({ filter: /^\.\.\/(load|\.\.\/engine)\.js$/ }, () => ({
      path: './model.mjs',
      external: true,
    }));
  },
};

mkdirSync(join(root, 'dist/package'), { recursive: true });
const text = (entry, outfile, plugins = []) =>
  build({
    absWorkingDir: root,
    entryPoints: [entry],
    outfile,
    plugins,
    bundle: true,
    minify: true,
    // Where an error is thrown, Node prints the whole line.
    lineLimit: 1000,
    format: 'esm',
    target: 'es2022',
    charset: 'utf8',
    legalComments: 'none',
    logLevel: 'warning',
  });

const files = ['model.js', 'worker.js', 'lanes.js'].map((name) => `dist/package/${name}`);
await Promise.all([
  text('runtime/model/index.ts', files[0]),
  text('runtime/model/worker/worker.ts', files[1], [shared]),
  text('runtime/model/lanes/index.ts', files[2]),
  text('runtime/page/main.ts', 'dist/package/page.js'),
  text('runtime/page/page.css', 'dist/package/page.css'),
]);

// Words to other bundlers are comments, which are gone by now.
for (const file of files.map((name) => join(root, name))) {
  const ignore = '/* @vite-ignore */ /* webpackIgnore: true */';
  writeFileSync(
    file,
    readFileSync(file, 'utf8').replace('import(`node:', `import(${ignore} \`node:`),
  );
}

await import('./bundle-command.mjs');
