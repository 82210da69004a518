import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { startChromium, unpackChromium } from '../../test/browser/chromium.js';
import { BEFORE_FAULT, clockstride, packOptions } from './page.js';
import { sorterNetlist } from './sorter.js';

/**
 * Photographs the demo's page, a few cycles after its fault, to `sorter.png` beside this file.
 *
 *   npm run build && npx tsx benchmarks/demo/picture.ts
 */

const AFTER = 6;
const watched = ['service.compare_reached', 'service.service_over', 'service.elapsed'];
const picture = fileURLToPath(new URL('sorter.png', import.meta.url));

const folder = mkdtempSync(join(tmpdir(), 'clockstride-picture-'));
try {
  writeFileSync(join(folder, 'sorter.v'), sorterNetlist());
  const status = clockstride(folder, packOptions('sorter.html'));
  if (status !== 0) throw new Error(`expected a page (exit status 0), got ${status}`);
  // Nothing that the page asks for leaves the machine.
  const browser = await startChromium(await unpackChromium(), 'http://127.0.0.1:9');
  const page = await browser.newPage({ viewport: { width: 1120, height: 640 } });
  await page.goto(pathToFileURL(join(folder, 'sorter.html')).href);
  await page.getByText('service', { exact: true }).click();
  for (const name of watched) await page.getByLabel(`${name} in the diagram`).check();
  const cycles = BEFORE_FAULT + AFTER;
  await page.getByLabel('cycles in a leap').fill(`${cycles}`);
  await page.getByRole('button', { name: 'Leap' }).click();
  await page.getByText(`Leapt to cycle ${cycles.toLocaleString('en-US')}.`).waitFor();
  await page.getByRole('button', { name: 'fewer cycles' }).click();
  await page.evaluate(() => window.scrollTo(0, 0));
  // The picture shows in the next frame, inner nets some frames later.
  await page.waitForTimeout(1000);
  await page.screenshot({ path: picture });
  await browser.close();
} finally {
  rmSync(folder, { recursive: true });
}
