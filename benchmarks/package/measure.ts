import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { cpus, tmpdir } from 'node:os';
import { extname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { gzipSync } from 'node:zlib';
import type { Browser } from 'playwright-core';
import { type Design, designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { packDesign } from '../../compiler/pack/packDesign.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { inspect } from '../../compiler/report/inspection.js';
import { startChromium, unpackChromium } from '../../test/browser/chromium.js';
import { circuits } from '../circuits/index.js';
import { type Frames, framesOf } from './frames.js';
import { cyclesPerSecond } from './runs.mjs';

/**
 * Measures model packages: sizes, the time to the first step in Chromium, cycles a second there and
 * in Node, and the frames of the one-file page. Writes `benchmarks/results/package.json` and `package.md`.
 *
 *   npm run build && npx tsx benchmarks/package/measure.ts
 */

interface Measured {
  readonly circuit: string;
  readonly gates: number;
  readonly wasmBytes: number;
  readonly wasmGzipped: number;
  /** With `--keep-names all`. */
  readonly allNamesBytes: number;
  readonly allNamesGzipped: number;
  readonly runtimeGzipped: number;
  /** Median. */
  readonly loadMs: number;
  /** Cycles a second in the fastest round. */
  readonly browser: number;
  readonly node: number;
  readonly frames: Frames;
}

const results = fileURLToPath(new URL('../results/', import.meta.url));
const ROUNDS = 7;

const wanted: readonly (readonly [string, Readonly<Record<string, number>>])[] = [
  ['lock', {}],
  ['sha256', {}],
  ['aes128', {}],
  ['aes128', { cores: 4 }],
];

function designFor(name: string, parameters: Readonly<Record<string, number>>): Design {
  const circuit = circuits.find((each) => each.name === name)!;
  const diagnostics = new Diagnostics();
  const source = new Source(`${name}.v`, [...circuit.write(parameters)].join(''));
  const read = readNetlist([source], {}, diagnostics);
  diagnostics.throwIfErrors();
  return designOf(read!);
}

async function measure(
  root: string,
  browser: Browser,
  origin: string,
  [name, parameters]: (typeof wanted)[number],
): Promise<Measured> {
  const label = [name, ...Object.entries(parameters).map(([key, value]) => `${key}=${value}`)];
  process.stderr.write(`${label.join(' ')}\n`);
  const design = designFor(name, parameters);
  const folder = (keep: string): string => join(root, `${label.join('-')}-${keep}`);
  const page = join(root, `${label.join('-')}.html`);
  const request = { page, version: '0', reading: {} };
  for (const keepNames of ['all', 'ports'] as const) {
    await packDesign(design, { output: folder(keepNames), keepNames, ...request });
  }
  const bytes = (keep: string, file: string): Buffer => readFileSync(join(folder(keep), file));
  const module = bytes('ports', 'model.wasm');
  const allNames = bytes('all', 'model.wasm');
  const address = `${origin}/${label.join('-')}-ports/model.mjs`;
  const loads: number[] = [];
  const rates: { browser: number; node: number }[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    loads.push(await inPage(browser, origin, 'loadAndStep', address));
    rates.push({
      browser: await inPage(browser, origin, 'cyclesPerSecond', address),
      node: await cyclesPerSecond(pathToFileURL(join(folder('ports'), 'model.mjs')).href),
    });
  }
  return {
    circuit: label.join(' '),
    gates: inspect(design, []).gates,
    wasmBytes: module.length,
    wasmGzipped: gzipSync(module).length,
    allNamesBytes: allNames.length,
    allNamesGzipped: gzipSync(allNames).length,
    runtimeGzipped: gzipSync(bytes('ports', 'model.mjs'), { level: 9 }).length,
    loadMs: median(loads),
    browser: Math.max(...rates.map((rate) => rate.browser)),
    node: Math.max(...rates.map((rate) => rate.node)),
    frames: await framesOf(browser, page),
  };
}

/** Runs one of the functions of `runs.mjs` in a page of its own, which knows nothing yet. */
async function inPage(
  browser: Browser,
  origin: string,
  run: 'loadAndStep' | 'cyclesPerSecond',
  address: string,
): Promise<number> {
  const context = await browser.newContext();
  const page = await context.newPage();
  await page.goto(`${origin}/page.html`);
  const measured = await page.evaluate(
    async ([runs, name, model]) => (await import(runs!))[name!](model),
    [`${origin}/runs.mjs`, run, address],
  );
  await context.close();
  return measured;
}

const types: Readonly<Record<string, string>> = {
  '.html': 'text/html',
  '.mjs': 'text/javascript',
  '.wasm': 'application/wasm',
};

function serve(root: string) {
  const server = createServer(({ url = '' }, response) => {
    response.setHeader('Content-Type', types[extname(url)] ?? 'text/plain');
    if (url === '/page.html') response.end('<!doctype html><title>package</title>');
    else if (url === '/runs.mjs') response.end(readFileSync(new URL('runs.mjs', import.meta.url)));
    else response.end(readFileSync(join(root, url)));
  });
  return new Promise<{ origin: string; close: () => void }>((resolve) => {
    server.listen(0, '127.0.0.1', () => {
      const { port } = server.address() as AddressInfo;
      const close = (): void => void server.close().closeAllConnections();
      resolve({ origin: `http://127.0.0.1:${port}`, close });
    });
  });
}

function median(values: readonly number[]): number {
  return [...values].sort((p, q) => p - q)[values.length >> 1]!;
}

function row(measured: Measured): string {
  const { circuit, gates, wasmBytes, wasmGzipped, allNamesBytes, allNamesGzipped } = measured;
  const { loadMs, browser, node } = measured;
  const each = (bytes: number): string => (bytes / gates).toFixed(1);
  const rate = (perSecond: number): string => Math.round(perSecond).toLocaleString('en-US');
  const cells = [
    circuit,
    gates,
    `${wasmBytes} (${each(wasmBytes)})`,
    `${wasmGzipped} (${each(wasmGzipped)})`,
    `${allNamesBytes} (${each(allNamesBytes)})`,
    `${allNamesGzipped} (${each(allNamesGzipped)})`,
    loadMs.toFixed(1),
    rate(browser),
    rate(node),
    (browser / node).toFixed(2),
  ];
  return `| ${cells.join(' | ')} |`;
}

function framesRow({ circuit, gates, frames }: Measured): string {
  const cells = [
    circuit,
    gates,
    frames.perSecond.toFixed(1),
    frames.longestMs.toFixed(1),
    frames.workMs.toFixed(1),
    frames.mostWorkMs.toFixed(1),
    Math.round(frames.cyclesPerSecond).toLocaleString('en-US'),
  ];
  return `| ${cells.join(' | ')} |`;
}

function report(measured: readonly Measured[], machine: Record<string, unknown>): string {
  const runtime = Math.max(...measured.map(({ runtimeGzipped }) => runtimeGzipped));
  return `# Model packages

Measured on ${machine.cores} cores of ${machine.processor}, Node ${machine.node}, Chromium ${machine.chromium}, by
\`npm run build && npx tsx benchmarks/package/measure.ts\`, in ${ROUNDS} rounds, each in a page of its own. Bytes of \`model.wasm\` include its description; in brackets, bytes a gate. The time to the first
step begins before \`model.mjs\` is imported: it holds fetching from this machine, compiling, loading,
\`step\` and \`read\`, and is a median. Cycles a second are those of \`runRows\` on random rows, with the
response, in the fastest round of each place, which other work on the machine disturbs least.

\`model.mjs\` is ${runtime} bytes gzipped. \`--keep-names all\` costs space and no time in a run: what
\`peek\` shows is computed when it is asked for.

| circuit | gates | wasm | gzipped | all names | gzipped | first step ms | cycles/s, Chromium | Node | ratio |
|---|---|---|---|---|---|---|---|---|---|
${measured.map(row).join('\n')}

## The one-file page

Each model runs as fast as it goes in its page, without a graphics processor, for five seconds: frames
a second, the longest time from one frame to the next, the part of a frame that the page takes (the
median, and what 99 of 100 stay below), and cycles a second. Inputs are held, so that cycles in which
nothing changes are passed over.

| circuit | gates | frames/s | longest ms | page ms | 99 of 100 | cycles/s |
|---|---|---|---|---|---|---|
${measured.map(framesRow).join('\n')}
`;
}

const root = mkdtempSync(join(tmpdir(), 'clockstride-measure-'));
process.env.TMPDIR = root;
const server = await serve(root);
const browser = await startChromium(await unpackChromium(), 'http://127.0.0.1:9');
try {
  const measured: Measured[] = [];
  for (const each of wanted) measured.push(await measure(root, browser, server.origin, each));
  const machine = {
    processor: cpus()[0]?.model,
    cores: cpus().length,
    node: process.version,
    chromium: browser.version(),
  };
  const json = JSON.stringify({ machine, packages: measured }, null, 2);
  writeFileSync(join(results, 'package.json'), `${json}\n`);
  writeFileSync(join(results, 'package.md'), report(measured, machine));
  process.stdout.write(report(measured, machine));
} finally {
  await browser.close();
  server.close();
  rmSync(root, { recursive: true });
}
