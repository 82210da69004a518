import { pathToFileURL } from 'node:url';
import type { Browser } from 'playwright-core';

/** How the one-file page of a model runs freely. */
export interface Frames {
  readonly perSecond: number;
  /** Milliseconds from one frame to the next, at most. */
  readonly longestMs: number;
  /** Milliseconds of a frame that the page takes for itself: the median, and all but one in a hundred. */
  readonly workMs: number;
  readonly mostWorkMs: number;
  readonly cyclesPerSecond: number;
}

const SETTLING_MS = 1500;
const MEASURED_MS = 5000;

interface Noted {
  readonly at: readonly number[];
  readonly took: readonly number[];
}

declare const notedFrames: { at: number[]; took: number[] };

// Notes when each frame of the page begins and how long the page works in it.
const noteFrames = `
  globalThis.notedFrames = { at: [], took: [] };
  const ask = requestAnimationFrame;
  globalThis.requestAnimationFrame = (act) => ask((time) => {
    const started = performance.now();
    act(time);
    notedFrames.at.push(time);
    notedFrames.took.push(performance.now() - started);
  });
`;

/** Opens a page from the disk, lets it run as fast as it goes, and looks at its frames. */
export async function framesOf(browser: Browser, file: string): Promise<Frames> {
  const context = await browser.newContext({ viewport: { width: 1280, height: 800 } });
  const page = await context.newPage();
  await page.addInitScript(noteFrames);
  await page.goto(pathToFileURL(file).href);
  await page.getByLabel('Rate').selectOption('as fast as it goes');
  await page.getByRole('button', { name: 'Run', exact: true }).click();
  await page.waitForTimeout(SETTLING_MS);
  const cycle = async (): Promise<number> =>
    Number((await page.locator('.where .number').textContent())!.replaceAll(',', ''));
  const [from, started] = [await cycle(), performance.now()];
  await page.evaluate(() => {
    notedFrames.at.length = 0;
    notedFrames.took.length = 0;
  });
  await page.waitForTimeout(MEASURED_MS);
  const { at, took }: Noted = await page.evaluate(() => notedFrames);
  const cyclesPerSecond = ((await cycle()) - from) / ((performance.now() - started) / 1000);
  await context.close();
  const work = [...took].sort((p, q) => p - q);
  return {
    perSecond: ((at.length - 1) * 1000) / (at.at(-1)! - at[0]!),
    longestMs: Math.max(...at.slice(1).map((time, i) => time - at[i]!)),
    workMs: work[work.length >> 1]!,
    mostWorkMs: work[Math.floor(work.length * 0.99)]!,
    cyclesPerSecond,
  };
}
