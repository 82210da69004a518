import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { ownDesign } from '../support/ownCircuits.js';
import { packInto } from '../support/packages.js';
import { startChromium, unpackChromium } from './chromium.js';
import { signatureInNode } from './jobs.js';
import { buildWithEsbuild, buildWithVite } from './package/bundles.js';
import { serveFolders } from './package/site.js';
import { fence, type Loopback } from './servers.js';

interface PackageRun {
  readonly name: string;
  readonly seed: number;
  readonly cycles: number;
}

declare const signatureInPage: (run: PackageRun) => Promise<string>;
declare const signatureInOwnWorker: (run: PackageRun) => Promise<string>;
declare const compareWorker: (name: string, cycles: number) => Promise<Record<string, unknown>>;
declare const compareLanes: (lanes: string, name: string) => Promise<Record<string, unknown>>;
declare const loadRounds: (name: string, rounds: number) => Promise<number>;
declare const liveInstances: number;
declare const results: () => Promise<{ there: unknown; here: unknown }>;

const aes = ownDesign('aes128');
const lock = ownDesign('lock');
const lock3 = designOf(lock.circuit, { threeValued: true });

let proxy: Loopback;
let site: Loopback;
let browser: Browser;
let page: Page;
const problems: string[] = [];
const closing: (() => unknown)[] = [];

beforeAll(async () => {
  const root = mkdtempSync(join(tmpdir(), 'clockstride-package-'));
  closing.push(() => rmSync(root, { recursive: true }));
  // What the browser unpacks and leaves goes with the folder.
  vi.stubEnv('TMPDIR', root);
  closing.push(() => vi.unstubAllEnvs());
  const folder = (name: string): string => join(root, name);
  const executable = unpackChromium();
  await packInto(folder('aes'), aes);
  await packInto(folder('lock'), lock, { keepNames: 'all' });
  await packInto(folder('lock3'), lock3);
  await packInto(folder('lanes'), lock, { lanes: 32 });
  await buildWithVite(folder('lock'), folder('vite'));
  await buildWithEsbuild(folder('lock'), folder('esbuild'));
  proxy = await fence();
  closing.push(proxy.close);
  const own = (path: string): string => fileURLToPath(new URL(path, import.meta.url));
  const packed = ['aes', 'lock', 'lock3', 'lanes', 'vite', 'esbuild'].map((name) => [
    name,
    folder(name),
  ]);
  site = await serveFolders({
    ...Object.fromEntries(packed),
    page: own('package'),
    runtime: own('../../dist/runtime'),
  });
  closing.push(site.close);
  browser = await startChromium(await executable, proxy.origin);
  closing.push(() => browser.close());
  page = await opened('page/page.html');
});

afterAll(async () => {
  for (const close of closing.reverse()) await close();
});

async function opened(path: string): Promise<Page> {
  const made = await browser.newPage();
  made.on('pageerror', (error) => problems.push(`${path}: ${error}`));
  made.on('console', (message) => problems.push(`${path}: ${message.text()}`));
  await made.goto(`${site.origin}/${path}`);
  await made.waitForLoadState('networkidle');
  return made;
}

describe('a package under a strict policy', () => {
  it.each([
    ['AES-128 over 100,000 cycles', aes, { name: 'aes', seed: 3, cycles: 100_000 }],
    ['three values over 20,000 cycles', lock3, { name: 'lock3', seed: 4, cycles: 20_000 }],
  ])('gives the response of a run: %s', async (_, design, run) => {
    const expected = await signatureInNode({ design, ...run }, 'wasm');
    expect(await page.evaluate((sent) => signatureInPage(sent), run)).toBe(expected);
    expect(await page.evaluate((sent) => signatureInOwnWorker(sent), run)).toBe(expected);
  });

  it('does the same in its own worker, with progress and an end on demand', async () => {
    const found = await page.evaluate(() => compareWorker('aes', 4000));
    expect(found).toMatchObject({ isSame: true, ended: 'AbortError' });
    expect(found.ones).toBeGreaterThan(10);
    expect(found.passed).toBeGreaterThan(0);
  });

  it('runs many lanes, each as a model of one sequence', async () => {
    const { lanes, expected, actual } = await page.evaluate(() => compareLanes('lanes', 'lock'));
    expect(lanes).toBe(32);
    expect(actual).toEqual(expected);
    expect(new Set(actual as string[]).size).toBeGreaterThan(1);
  });

  it('lets go of a thousand models that were disposed of', async () => {
    expect(await page.evaluate(() => loadRounds('lock', 1000))).toBe(3000);
    const session = await page.context().newCDPSession(page);
    // Several rounds: what one lets go of may be all that holds the next.
    let live = Number.POSITIVE_INFINITY;
    for (let round = 0; round < 10 && live >= 100; round++) {
      await session.send('HeapProfiler.collectGarbage');
      live = await page.evaluate(() => liveInstances);
    }
    // Some of the two thousand instances are still held by the engine itself.
    expect(live).toBeLessThan(100);
  });
});

describe('a package in an app', () => {
  it.each(['vite', 'esbuild'])('built by %s runs in the page and in a worker', async (name) => {
    const app = await opened(`${name}/index.html`);
    const { here, there } = await app.evaluate(() => results());
    expect(there).toEqual(here);
    expect(here).toMatchObject({ signal_below: 0, state: expect.any(Number) });
    await app.close();
  });
});

it('leaves no complaint in any console and asks for nothing elsewhere', () => {
  expect(problems).toEqual([]);
  expect(proxy.requests).toEqual([]);
});
