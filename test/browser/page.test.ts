import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type axe from 'axe-core';
import type { Browser, BrowserContextOptions, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { packDesign } from '../../compiler/pack/packDesign.js';
import { RandomBits } from '../../runtime/random.js';
import { WorkFolder } from '../support/command.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { startChromium, unpackChromium } from './chromium.js';
import { fence, type Loopback } from './servers.js';

const lock = ownDesign('lock');
const scratchpad = designFrom(
  new Source(
    'scratchpad.v',
    `module scratchpad(input clk, input we, input [13:0] at, input [63:0] data,
                       input event_of_a_sensor_at_the_very_end_of_the_line_behind_the_mill,
                       output reg [63:0] q, output reg used);
       reg [63:0] words [0:16383];
       stage near(.clk(clk), .seen(event_of_a_sensor_at_the_very_end_of_the_line_behind_the_mill));
       initial used = 0;
       always @(posedge clk) begin
         used <= used | we;
         if (we) words[at] <= data;
         q <= words[at];
       end
     endmodule
     module stage(input clk, input seen);
       count far(.clk(clk), .seen(seen));
     endmodule
     module count(input clk, input seen);
       reg [7:0] events;
       initial events = 0;
       always @(posedge clk) events <= events + seen;
     endmodule`,
  ),
);

const designs: Readonly<Record<string, Design>> = {
  lock,
  scratchpad,
  scratchpad3: designOf(scratchpad.circuit, { threeValued: true }),
};

const work = new WorkFolder();
let root = '';
let proxy: Loopback;
let browser: Browser;
const problems: string[] = [];
const closing: (() => unknown)[] = [];

beforeAll(async () => {
  root = mkdtempSync(join(tmpdir(), 'clockstride-page-'));
  closing.push(() => rmSync(root, { recursive: true }));
  // What the browser leaves goes with the folder.
  vi.stubEnv('TMPDIR', root);
  closing.push(() => vi.unstubAllEnvs());
  const executable = unpackChromium();
  for (const [name, design] of Object.entries(designs)) {
    const page = join(root, `${name}.html`);
    await packDesign(design, { page, keepNames: 'ports', version: '0.0.0', reading: {} });
  }
  proxy = await fence();
  closing.push(proxy.close);
  browser = await startChromium(await executable, proxy.origin);
  closing.push(() => browser.close());
});

afterAll(async () => {
  for (const close of closing.reverse()) await close();
});

/** Opens the page of a design from the disk. */
async function opened(name: string, options: BrowserContextOptions = {}): Promise<Page> {
  const page = await browser.newPage(options);
  page.setDefaultTimeout(60_000);
  page.on('pageerror', (error) => problems.push(`${name}: ${error}`));
  page.on('console', (message) => problems.push(`${name}: ${message.text()}`));
  await page.goto(addressOf(name));
  await page.getByRole('button', { name: 'Step' }).waitFor();
  return page;
}

const addressOf = (name: string): string => pathToFileURL(join(root, `${name}.html`)).href;

async function downloaded(page: Page, name: string): Promise<string> {
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('button', { name }).click(),
  ]);
  return readFile((await download.path())!, 'utf8');
}

async function step(page: Page, times = 1): Promise<void> {
  for (let i = 0; i < times; i++) await page.getByRole('button', { name: 'Step' }).press('Enter');
}

/** Lets go of a file over the page, as a hand would. */
const dropped = (page: Page, name: string, text: string): Promise<void> =>
  page.evaluate(
    ([title, content]) => {
      const dataTransfer = new DataTransfer();
      dataTransfer.items.add(new File([content!], title!));
      const event = { dataTransfer, bubbles: true, cancelable: true };
      document.body.dispatchEvent(new DragEvent('dragover', event));
      document.body.dispatchEvent(new DragEvent('drop', event));
    },
    [name, text],
  );

const cycleOf = (page: Page): Promise<string | null> =>
  page.locator('.where .number').textContent();

describe('a model as one page', () => {
  const boats = [
    'reset,call_below,level_low,doorway_clear,@cycles',
    '1,0,1,1,2',
    '0,0,1,1,10',
    '0,1,,,5',
    '"0",0,1,1,483',
  ].join('\n');

  it('writes the response of a run for a dropped table, and waveforms that give it again', async () => {
    const page = await opened('lock');
    await dropped(page, 'boats.csv', boats);
    await page.getByText('boats.csv drives the inputs for 500 cycles.').waitFor();
    await page.getByLabel('cycles in a leap').fill('500');
    await page.getByRole('button', { name: 'Leap' }).click();
    await page.getByText('Leapt to cycle 500.').waitFor();
    work.write('lock.v', new TextDecoder().decode(lock.circuit.sources[0]!.bytes));
    work.write('boats.csv', boats);
    const expected = await responseOfRun('boats.csv');
    expect(await downloaded(page, 'Response CSV')).toBe(expected);
    work.write('page.vcd', await downloaded(page, 'Waveforms VCD'));
    expect(await responseOfRun('page.vcd')).toBe(expected);
    await page.close();
  });

  it('is worked by the keyboard, and comes back to a moment by its address', async () => {
    const page = await opened('lock');
    await page.getByRole('switch', { name: 'call_below' }).press('Space');
    await page.getByRole('button', { name: 'pulse reset for two cycles' }).press('Enter');
    await step(page, 3);
    await page.getByRole('slider').press('Home');
    await page.getByText('at cycle 0').waitFor();
    await page.getByRole('slider').press('ArrowRight');
    await page.getByText('at cycle 1').waitFor();
    await page.getByLabel('timer in the diagram').check();
    await page.getByRole('button', { name: 'Link to this moment' }).click();
    await page.getByText('The address of this moment').waitFor();
    const state = await downloaded(page, 'State JSON');
    const again = await opened('lock');
    await again.goto(page.url());
    await again.getByText('At cycle 5, as the address says.').waitFor();
    expect(await downloaded(again, 'State JSON')).toBe(state);
    expect(await again.getByLabel('timer in the diagram').isChecked()).toBe(true);
    await again.goto(`${addressOf('lock')}#at=AAAA`);
    await again.getByText('The address names a moment that cannot be shown').waitFor();
    await page.close();
    await again.close();
  });

  it('runs freely and stops, leaps far while it stays alive, and tells what a table gets wrong', async () => {
    const page = await opened('lock');
    await page.getByLabel('Rate').selectOption('as fast as it goes');
    await page.getByRole('button', { name: 'Run' }).click();
    await page.waitForFunction(() => {
      const text = document.querySelector('.where .number')?.textContent ?? '';
      return Number(text.replaceAll(',', '')) > 20_000;
    });
    await page.getByRole('button', { name: 'Stop' }).click();
    const stopped = await cycleOf(page);
    await page.getByText(`Stopped at cycle ${stopped}.`).waitFor();
    await dropped(page, 'bad.csv', 'reset\n2\n');
    await page.getByText('bad.csv:2: reset takes a value of 1 bits, got 2').waitFor();
    expect(await cycleOf(page)).toBe(stopped);
    await page.getByRole('button', { name: 'Reset', exact: true }).click();
    await page.getByLabel('cycles in a leap').fill('1000000');
    await page.getByRole('button', { name: 'Leap' }).click();
    await page.getByText('Leapt to cycle 1,000,000.').waitFor();
    await page.close();
  });

  it('keeps a value that a port cannot take in sight, and the port as it was', async () => {
    const page = await opened('scratchpad');
    const field = page.getByLabel('at', { exact: true });
    await field.fill('0x4000');
    await field.press('Tab');
    const reason = 'at takes 14 bits, as in 12, 0x1f or 0b101; it is still 0x0000.';
    await page.getByRole('status').getByText(reason).waitFor();
    expect(await field.inputValue()).toBe('0x4000');
    const described = await field.getAttribute('aria-describedby');
    expect(await page.locator(`#${described}`).textContent()).toBe(reason);
    await field.press('Escape');
    expect(await field.inputValue()).toBe('0x0000');
    expect(await field.getAttribute('aria-invalid')).toBeNull();
    await page.close();
  });

  it('runs a memory, and says where a moment does not fit into an address', async () => {
    const page = await opened('scratchpad');
    await page.getByRole('switch', { name: 'we' }).click();
    for (let i = 0; i < 2; i++) {
      await page.getByLabel('at', { exact: true }).fill(`${i + 5}`);
      await page.getByLabel('data', { exact: true }).fill(`0xfedcba987654321${i}`);
      await page.getByLabel('data', { exact: true }).press('Enter');
      await step(page);
    }
    await page.getByRole('switch', { name: 'we' }).click();
    await page.getByRole('button', { name: 'at minus 1' }).click();
    await step(page);
    await page.locator('[aria-labelledby=outputs]').getByText('0xfedcba9876543210').waitFor();
    const state = JSON.parse(await downloaded(page, 'State JSON'));
    const contents = new Uint32Array(16_384 * 2);
    new RandomBits(1).fill(contents, 0, contents.length);
    const memories = Buffer.from(contents.buffer).toString('base64');
    await dropped(page, 'other.json', JSON.stringify({ ...state, memories }));
    await page.getByText('other.json: now at cycle 3.').waitFor();
    await page.getByLabel('first word of words shown').fill('0x3ff0');
    await page.getByLabel('first word of words shown').press('Enter');
    const last = `0x${new BigUint64Array(contents.buffer)[16_383]!.toString(16).padStart(16, '0')}`;
    const panel = page.locator('[aria-labelledby=memories]');
    await panel.locator('.row', { hasText: '[16383]' }).getByText(last).waitFor();
    await page.getByLabel('words[16383] in the diagram').check();
    await step(page);
    await page.locator('.track', { hasText: 'words[16383]' }).getByText(last).waitFor();
    await page.getByLabel('first word of words shown').fill('16384');
    await page.getByLabel('first word of words shown').press('Enter');
    await page.getByRole('status').getByText('words has words 0 to 16383.').waitFor();
    const word = `0x${new BigUint64Array(contents.buffer)[5]!.toString(16).padStart(16, '0')}`;
    await page.locator('[aria-labelledby=outputs]').getByText(word).waitFor();
    await page.getByRole('button', { name: 'Link to this moment' }).click();
    await page.getByText(/would have \d{3},\d{3} characters: download its state/).waitFor();
    await page.close();
  });

  it('shows x where a three-valued model has it, and takes it as an input', async () => {
    const page = await opened('scratchpad3');
    const used = page.locator('[aria-labelledby=outputs] .lamp');
    await page
      .locator('[aria-labelledby=outputs]')
      .getByText(`0b${'x'.repeat(64)}`)
      .waitFor();
    expect(await used.textContent()).toBe('0');
    await page.getByRole('radiogroup', { name: 'we' }).getByLabel('x').check();
    await step(page);
    await used.getByText('x').waitFor();
    await page.getByRole('radiogroup', { name: 'we' }).getByLabel('1').check();
    await page.getByLabel('data', { exact: true }).fill(`0b1x0`);
    await page.getByLabel('data', { exact: true }).press('Enter');
    await step(page, 2);
    await used.getByText('1').waitFor();
    await page.locator('[aria-labelledby=outputs]').getByText('1x0').waitFor();
    await page.close();
  });

  it('shows what is deep inside, and finds it by name', async () => {
    const page = await opened('scratchpad');
    await page.getByText('near', { exact: true }).click();
    await page.getByText('far', { exact: true }).click();
    await page.getByRole('switch', { name: 'event_of_a_sensor' }).click();
    await step(page, 3);
    const row = page.locator('.tree .row', { hasText: 'events' });
    await row.getByText('0x03').waitFor();
    await page.getByLabel('find registers and nets by name').fill('EVENT');
    await page.getByText('1 found').waitFor();
    await step(page);
    await row.getByText('0x04').waitFor();
    await page.close();
  });
});

describe('the page for everybody', () => {
  const source = readFileSync(createRequire(import.meta.url).resolve('axe-core'), 'utf8');
  const desktop = { width: 1280, height: 800 };
  const phone = { width: 390, height: 844 };

  it.each([
    ['scratchpad', 'light', desktop],
    ['scratchpad3', 'dark', phone],
  ] as const)(
    'keeps WCAG 2.2 AA as far as axe can tell: %s, %s, %o',
    async (name, colorScheme, viewport) => {
      const page = await opened(name, { colorScheme, viewport });
      await page.getByText('near', { exact: true }).click();
      await page.getByText('far', { exact: true }).click();
      await page.getByLabel('near.far.events in the diagram').check();
      await page.getByLabel('at', { exact: true }).fill('what');
      await page.getByLabel('at', { exact: true }).press('Tab');
      await page.getByRole('status').getByText('at takes 14 bits').waitFor();
      // Under the pointer and while it runs, the button that matters most has to be read as well.
      await page.getByRole('button', { name: 'Run' }).click();
      await page.getByRole('button', { name: 'Stop' }).hover();
      await page.evaluate(source);
      const { violations, passes } = await page.evaluate(() =>
        (globalThis as unknown as { axe: typeof axe }).axe.run(document, {
          runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'],
          resultTypes: ['violations'],
        }),
      );
      expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html}`)).toEqual([]);
      expect(passes.length).toBeGreaterThan(20);
      await page.setViewportSize({ width: 320, height: 640 });
      const overflow = await page.evaluate(
        () => document.documentElement.scrollWidth - window.innerWidth,
      );
      expect(overflow, 'pixels beyond the narrowest phone').toBeLessThanOrEqual(0);
      await page.close();
    },
  );

  it('names each of its controls, and none is smaller than 24 pixels', async () => {
    const page = await opened('lock');
    const found = await page.evaluate(() =>
      Array.from(document.querySelectorAll('button, input, select, canvas'), (control) => {
        const { width, height } = control.getBoundingClientRect();
        const labels = (control as HTMLInputElement).labels ?? [];
        const label = Array.from(labels, (each) => each.textContent).join();
        const name = control.getAttribute('aria-label') ?? (label || control.textContent);
        // A box that stands in a row of its own has the row's room around it.
        const least = control.matches('[type=checkbox], [hidden]') ? 0 : 24;
        const isNamed = control.matches('[hidden]') || !!name?.trim();
        return { html: control.outerHTML, isNamed, isSmall: width < least || height < least };
      }),
    );
    expect(found.length).toBeGreaterThan(40);
    expect(found.filter(({ isNamed, isSmall }) => !isNamed || isSmall)).toEqual([]);
    await page.close();
  });

  it('is reached by the Tab key in all its parts, and shows where one is', async () => {
    const page = await opened('scratchpad');
    const expected = await page
      .locator('button:not([hidden]), input:not([hidden]), select, canvas, summary')
      .count();
    const seen = new Set<string>();
    for (let i = 0; i < expected; i++) {
      await page.keyboard.press('Tab');
      const { place, outline } = await page.evaluate(() => {
        const at = document.activeElement!;
        return {
          place: `${Array.from(document.querySelectorAll('*')).indexOf(at)}`,
          outline: getComputedStyle(at).outlineStyle,
        };
      });
      expect(outline).toBe('solid');
      seen.add(place);
    }
    expect(seen.size).toBe(expected);
    await page.close();
  });

  it('speaks in two places only, and neither tells each value', async () => {
    const page = await opened('lock');
    const speaking = page.locator('[aria-live], [role=status], [role=alert], [role=log], output');
    expect(await speaking.count()).toBe(2);
    const before = await speaking.allTextContents();
    await step(page, 3);
    await page.locator('.where').getByText('3').waitFor();
    expect(await speaking.allTextContents()).toEqual(before);
    await page.close();
  });
});

/** What `clockstride run --response` writes of 500 cycles of the lock. */
async function responseOfRun(stimulus: string): Promise<string> {
  const options = ['--stimulus', stimulus, '--cycles', '500', '--response', 'out.csv'];
  await work.run('run', 'lock.v', ...options);
  return work.read('out.csv');
}

it('leaves no complaint in any console and asks for nothing elsewhere', () => {
  expect(problems).toEqual([]);
  expect(proxy.requests).toEqual([]);
});
