import {
  constants,
  copyFileSync,
  mkdtempSync,
  openSync,
  readSync,
  rmSync,
  writeSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { engineNames } from '../../compiler/engines.js';
import { ownDesign } from '../support/ownCircuits.js';
import { smallCircuit } from '../support/smallCircuit.js';
import { buildRuntime } from './buildRuntime.js';
import { startChromium, unpackChromium } from './chromium.js';
import { type Job, jobOf, type Run, signatureInNode } from './jobs.js';
import { fence, type Loopback, servePage } from './servers.js';

declare const signatureInPage: (job: Job) => Promise<string>;
declare const signatureInWorker: (job: Job) => Promise<string>;

// A toggle that nothing resets, a register that the input resets, and a latch.
const small = smallCircuit({
  inputs: ['clk', 'a', 'b', 'clear'],
  outputs: ['toggle', 'y', 'held'],
  registers: {
    toggle: { clock: 'clk', data: 'next' },
    q: { clock: 'clk', data: 'sum', reset: 'clear', edge: -1 },
  },
  latches: { held: { enable: 'b', data: 'y' } },
  gates: { next: 'xor toggle a', sum: 'xnor q b', y: 'mux a q toggle' },
});

const cycles = 10_000;
const runs: readonly (readonly [name: string, run: Run])[] = [
  ['a small circuit', { design: designOf(small), seed: 1, cycles }],
  ['one of three values', { design: designOf(small, { threeValued: true }), seed: 2, cycles }],
  ['a CRC-32', { design: ownDesign('crc32'), seed: 3, cycles }],
];

let folder = '';
let runtime = '';
let executable = '';
let proxy: Loopback | undefined;
let server: Loopback | undefined;
let browser: Browser | undefined;
let page: Page;

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'clockstride-browser-'));
  executable = await unpackChromium(folder);
  runtime = buildRuntime(join(folder, 'built'));
  proxy = await fence();
  server = await servePage(runtime);
  browser = await startChromium(executable, proxy.origin);
  page = await openPage(browser, server.origin);
});

afterAll(async () => {
  await browser?.close();
  await server?.close();
  await proxy?.close();
  rmSync(folder, { recursive: true, force: true });
});

/** Opens the page that runs jobs; throws what its console says if that is not nothing. */
async function openPage(browser: Browser, origin: string): Promise<Page> {
  const opened = await browser.newPage();
  const problems: string[] = [];
  opened.on('pageerror', (error) => problems.push(String(error)));
  opened.on('console', (message) => problems.push(message.text()));
  await opened.goto(origin);
  if (problems.length > 0) throw new Error(`the page does not load: ${problems.join('; ')}`);
  return opened;
}

describe('the built runtime', () => {
  it.each(runs)(
    'signs %s in a page and in a worker as every engine does in Node',
    async (_, run) => {
      const job = await jobOf(run);
      const { signatureOf } = await import('./page/signatureOf.mjs');
      const built = await import(pathToFileURL(join(runtime, 'index.js')).href);
      const signatures: Record<string, string> = {
        page: await page.evaluate((sent) => signatureInPage(sent), job),
        worker: await page.evaluate((sent) => signatureInWorker(sent), job),
        built: await signatureOf(built, job),
      };
      for (const name of engineNames) signatures[name] = await signatureInNode(run, name);
      const { reference } = signatures;
      expect(reference).not.toBe('0'.repeat(16));
      expect(signatures).toEqual(
        Object.fromEntries(Object.keys(signatures).map((where) => [where, reference])),
      );
    },
  );
});
