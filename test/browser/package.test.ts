import { mkdtempSync, rmSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { WorkFolder } from '../support/command.js';
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
declare const loadRounds: (name: string, rounds: number) => Promise<number>;
declare const liveInstances: number;
declare const results: () => Promise<{ there: unknown; here: unknown }>;

const aes = ownDesign('aes128');
const lock = ownDesign('lock');
const lock3 = designOf(lock.circuit, { threeValued: true });

const work = new WorkFolder();

let proxy: Loopback;
let site: Loopback;
let browser: Browser;
let page: Page;
let pageFile = '';
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
  await packInto(folder('lock'), lock, { page: folder('lock.html'), keepNames: 'all' });
  pageFile = pathToFileURL(folder('lock.html')).href;
  await packInto(folder('lock3'), lock3);
  await buildWithVite(folder('lock'), folder('vite'));
  await buildWithEsbuild(folder('lock'), folder('esbuild'));
  proxy = await fence();
  closing.push(proxy.close);
  const own = (path: string): string => fileURLToPath(new URL(path, import.meta.url));
  const packed = ['aes', 'lock', 'lock3', 'vite', 'esbuild'].map((name) => [name, folder(name)]);
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

describe('a model as one page', () => {
  const boats = [
    'reset,call_below,level_low,doorway_clear,@cycles',
    '1,0,1,1,2',
    '0,0,1,1,10',
    '0,1,,,5',
    '"0",0,1,1,483',
  ].join('\n');

  async function openedPage(): Promise<Page> {
    const made = await browser.newPage();
    made.on('pageerror', (error) => problems.push(`page: ${error}`));
    made.on('console', (message) => problems.push(`page: ${message.text()}`));
    await made.goto(pageFile);
    await made.getByRole('button', { name: 'Step' }).waitFor();
    return made;
  }

  const cycleOf = (made: Page): Promise<string | null> =>
    made.locator('.where output').textContent();

  async function downloaded(made: Page, name: string): Promise<string> {
    const [download] = await Promise.all([
      made.waitForEvent('download'),
      made.getByRole('button', { name }).click(),
    ]);
    return readFile((await download.path())!, 'utf8');
  }

  it('writes the response of a run for a stimulus table', async () => {
    const made = await openedPage();
    const file = { name: 'boats.csv', mimeType: 'text/csv', buffer: Buffer.from(boats) };
    await made.locator('input[type=file]').setInputFiles(file);
    await made.getByText('boats.csv drives the inputs for 500 cycles.').waitFor();
    await made.getByLabel('cycles in a leap').fill('500');
    await made.getByRole('button', { name: 'Leap' }).click();
    expect(await downloaded(made, 'Response CSV')).toBe(await responseOfRun(boats, 500));
    const dump = await downloaded(made, 'Waveforms VCD');
    expect(dump).toContain('$enddefinitions $end\n#0\n');
    expect(dump.trimEnd().split('\n').at(-1)).toBe('#5000');
    await made.close();
  });

  it('is worked by the keyboard, and comes back to a moment by its address', async () => {
    const made = await openedPage();
    await made.getByRole('switch', { name: 'call_below' }).press('Space');
    await made.getByRole('button', { name: 'pulse reset for two cycles' }).press('Enter');
    for (let i = 0; i < 3; i++) await made.getByRole('button', { name: 'Step' }).press('Enter');
    await made.getByRole('slider').press('Home');
    await made.getByText('at cycle 0').waitFor();
    await made.getByRole('slider').press('ArrowRight');
    await made.getByText('at cycle 1').waitFor();
    await made.getByLabel('timer in the diagram').check();
    await made.getByRole('button', { name: 'Link to this moment' }).click();
    await made.getByText('The address of this moment').waitFor();
    const state = await downloaded(made, 'State JSON');
    const again = await openedPage();
    await again.goto(made.url());
    await again.getByText('At cycle 5, as the address says.').waitFor();
    expect(await downloaded(again, 'State JSON')).toBe(state);
    expect(await again.getByLabel('timer in the diagram').isChecked()).toBe(true);
    await again.goto(`${pageFile}#at=AAAA`);
    await again.getByText('The address names a moment that cannot be shown').waitFor();
    await made.close();
    await again.close();
  });

  it('runs freely and stops, and shows what a table gets wrong', async () => {
    const made = await openedPage();
    await made.getByLabel('Rate').selectOption('as fast as it goes');
    await made.getByRole('button', { name: 'Run' }).click();
    await made.waitForFunction(() => {
      const text = document.querySelector('.where output')?.textContent ?? '';
      return Number(text.replaceAll(',', '')) > 20_000;
    });
    await made.getByRole('button', { name: 'Stop' }).click();
    const stopped = await cycleOf(made);
    await made.getByText(`Stopped at cycle ${stopped}.`).waitFor();
    const file = { name: 'bad.csv', mimeType: 'text/csv', buffer: Buffer.from('reset\n2\n') };
    await made.locator('input[type=file]').setInputFiles(file);
    await made.getByText('bad.csv:2: reset takes a value of 1 bits, got 2').waitFor();
    expect(await cycleOf(made)).toBe(stopped);
    await made.close();
  });

  it('names each of its controls, and none is smaller than 24 pixels', async () => {
    const made = await openedPage();
    const found = await made.evaluate(() =>
      Array.from(document.querySelectorAll('button, input, select, canvas'), (control) => {
        const { width, height } = control.getBoundingClientRect();
        const labels = (control as HTMLInputElement).labels ?? [];
        const label = Array.from(labels, (each) => each.textContent).join();
        const name = control.getAttribute('aria-label') ?? (label || control.textContent);
        // A box that stands in a row of its own has the row's room around it.
        const least = control.matches('[type=checkbox], [hidden]') ? 0 : 24;
        return { name: name?.trim(), isSmall: width < least || height < least };
      }),
    );
    expect(found.length).toBeGreaterThan(50);
    expect(found.filter(({ name, isSmall }) => !name || isSmall)).toEqual([]);
    await made.setViewportSize({ width: 320, height: 640 });
    const overflow = await made.evaluate(
      () => document.documentElement.scrollWidth - window.innerWidth,
    );
    expect(overflow, 'pixels beyond the narrowest phone').toBeLessThanOrEqual(0);
    await made.close();
  });
});

/** What `clockstride run --response` writes of the lock. */
async function responseOfRun(stimulus: string, cycles: number): Promise<string> {
  const text = new TextDecoder().decode(lock.circuit.sources[0]!.bytes);
  work.write('lock.v', text);
  work.write('in.csv', stimulus);
  const options = ['--stimulus', 'in.csv', '--cycles', `${cycles}`, '--response', 'out.csv'];
  await work.run('run', 'lock.v', ...options);
  return work.read('out.csv');
}

it('leaves no complaint in any console and asks for nothing elsewhere', () => {
  expect(problems).toEqual([]);
  expect(proxy.requests).toEqual([]);
});
