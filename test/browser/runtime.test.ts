import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { ownDesign } from '../support/ownCircuits.js';
import { smallCircuit } from '../support/smallCircuit.js';
import { startChromium, unpackChromium } from './chromium.js';
import { type Job, jobOf, type Run, signatureInNode, signatureOfBuilt } from './jobs.js';
import { copyLacking } from './lackingCopy.js';
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
let executable = '';
let proxy: Loopback;
let server: Loopback;
let browser: Browser;
let page: Page;
const closing: (() => Promise<void>)[] = [];

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'clockstride-browser-'));
  closing.push(async () => rmSync(folder, { recursive: true }));
  // What the browser unpacks and leaves goes with the folder.
  vi.stubEnv('TMPDIR', folder);
  closing.push(async () => void vi.unstubAllEnvs());
  executable = await unpackChromium();
  proxy = await fence();
  closing.push(proxy.close);
  server = await servePage();
  closing.push(server.close);
  browser = await startChromium(executable, proxy.origin);
  closing.push(() => browser.close());
  page = await openPage(browser, server.origin);
});

afterAll(async () => {
  for (const close of closing.reverse()) await close();
});

/** Opens the page that runs jobs; throws what its console says, if anything. */
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
  it.each(runs)('signs %s in a browser as all engines do in Node', async (_, run) => {
    const job = await jobOf(run);
    const signatures = {
      page: await page.evaluate((sent) => signatureInPage(sent), job),
      worker: await page.evaluate((sent) => signatureInWorker(sent), job),
      built: await signatureOfBuilt(job),
      wasm: await signatureInNode(run, 'wasm'),
      bytecode: await signatureInNode(run, 'bytecode'),
    };
    const expected = await signatureInNode(run, 'reference');
    expect(expected).not.toBe('0'.repeat(16));
    for (const [place, signature] of Object.entries(signatures)) {
      expect(signature, `the signature of ${place}`).toBe(expected);
    }
  });

  it('loads nothing of its part for Node', () => {
    const modules = server.requests.filter((path) => path.startsWith('/runtime/'));
    expect(modules).toContain('/runtime/index.js');
    expect(modules.filter((path) => path.startsWith('/runtime/node/'))).toEqual([]);
  });
});

describe('the browser', () => {
  it('asks for nothing beyond the loopback interface', async () => {
    expect(proxy.requests).toEqual([]);
    // RFC 2606 keeps this domain for names that never exist. That the attempt is seen shows that
    // others would have been.
    const outside = 'http://outside.invalid/';
    const other = await browser.newPage();
    await other.goto(outside);
    await other.close();
    expect(proxy.requests).toEqual([outside]);
  });

  it('is not started where a shared library is missing, and the message names it', async () => {
    const { copy, library } = copyLacking(executable, join(folder, 'lacking'));
    await expect(startChromium(copy, proxy.origin)).rejects.toThrow(`lacks ${library};`);
  });

  it('says why it does not start for another reason', async () => {
    const absent = join(folder, 'absent');
    await expect(startChromium(absent, proxy.origin)).rejects.toThrow(/not start here.*absent/s);
  });
});
