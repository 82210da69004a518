import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { type Design, designOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { runDesign } from '../../compiler/run/runDesign.js';
import { MOST_SHOWN, pictureForm } from '../../compiler/waveform/picture/pictureForm.js';
import { signalsOf } from '../../compiler/waveform/signalList.js';
import { tableForm } from '../../compiler/waveform/tableForm.js';
import type { WaveForm, WaveWindow } from '../../compiler/waveform/wave.js';
import { writeWave } from '../../compiler/waveform/writeWave.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-forms-'));
afterAll(() => rmSync(folder, { recursive: true }));

// Cleared in the first cycle, and counting from then on.
const { circuit } = designFrom(
  new Source(
    'tally.v',
    `module tally(input clk, input clear, output reg [11:0] n, output odd);
       assign odd = n[0];
       always @(posedge clk) if (clear) n <= 0; else n <= n + 12'd1;
     endmodule`,
  ),
);

const ALL = { from: 0, to: Number.POSITIVE_INFINITY };

async function written(
  design: Design,
  form: WaveForm,
  patterns: readonly string[],
  {
    window = ALL,
    cycles = 6,
    shift = 0,
  }: { window?: WaveWindow; cycles?: number; shift?: number } = {},
): Promise<string> {
  const path = join(folder, 'waves');
  const { threeValued, inputs } = design.layout;
  const row = (clear: number) =>
    Uint32Array.from({ length: inputs.words * (threeValued ? 2 : 1) }, (_, i) =>
      i === 0 ? clear : 0,
    );
  await runDesign(design, {
    stimulus: [
      { cycles: 1, rows: row(1), stride: 0 },
      { cycles: cycles - 1, rows: row(0), stride: 0 },
    ],
    ...{ engine: 'bytecode', powerUp: threeValued ? 'unknown' : 'one', seed: 0 },
    outlets: [writeWave(path, form, signalsOf(design.circuit, patterns), window, shift)],
  });
  return readFileSync(path, 'utf8');
}

describe('a table of waves', () => {
  it('has a column for each signal and values as in a response', async () => {
    const design = designOf(circuit, { threeValued: true });
    expect(await written(design, tableForm, ['odd', 'n', 'n[3:0]', 'n[11]'])).toBe(
      [
        'cycle,odd,n,n[3:0],n[11]',
        '0,x,0bxxxxxxxxxxxx,0bxxxx,x',
        '1,0,0x000,0x0,0',
        '2,1,0x001,0x1,0',
        '3,0,0x002,0x2,0',
        '4,1,0x003,0x3,0',
        '5,0,0x004,0x4,0',
        '',
      ].join('\n'),
    );
  });

  it('has the cycles of the window, numbered as is wished', async () => {
    const design = designOf(circuit);
    const window = { from: 2, to: 3 };
    expect(await written(design, tableForm, ['n'], { window, shift: 1000 })).toBe(
      'cycle,n\n1002,0x001\n1003,0x002\n',
    );
  });
});

describe('a timing diagram', () => {
  const texts = (svg: string): string[] =>
    [...svg.matchAll(/<text[^>]*>([^<]*)/g)].map(([, text]) => text!);

  it('names signals and cycles, and shows words in hexadecimal', async () => {
    const svg = await written(designOf(circuit), pictureForm, ['odd', 'n'], { cycles: 20 });
    expect(svg.startsWith('<svg xmlns="http://www.w3.org/2000/svg"')).toBe(true);
    expect(texts(svg)).toEqual(
      expect.arrayContaining(['Waves of tally', 'odd', 'n', 'fff', '000', '00a', 'cycle', '14']),
    );
    expect(texts(svg)[1]).toBe('cycles 0 to 19, values as they are when outputs are sampled');
    expect(svg).not.toContain('class="unknown"');
    expect(svg).not.toMatch(/<script|href|NaN|undefined/);
  });

  it('hatches what is x', async () => {
    const svg = await written(designOf(circuit, { threeValued: true }), pictureForm, ['odd', 'n']);
    expect(svg.match(/class="unknown"/g)).toHaveLength(2);
    expect(svg).toContain('<title>cycle 0: 0bxxxxxxxxxxxx</title>');
  });

  it('draws a clock with its edges', async () => {
    const svg = await written(designOf(circuit), pictureForm, ['clk'], { cycles: 8 });
    // Low in the first half of a cycle, high in the second.
    expect(svg.match(/class="high"/g)).toHaveLength(8);
  });

  it('leaves out what has no room, and says it where it is pointed at', async () => {
    const svg = await written(designOf(circuit), pictureForm, ['n'], { cycles: 400 });
    expect(texts(svg)).not.toContain('0c8');
    expect(svg).toContain('<title>cycle 201: 0x0c8</title>');
  });

  it('takes no more signals than can be looked at', () => {
    const lock = ownDesign('lock');
    const list = signalsOf(lock.circuit, []);
    expect(list.count).toBeGreaterThan(MOST_SHOWN.signals);
    expect(() => pictureForm({ design: lock, list, window: ALL })).toThrow(
      `at most ${MOST_SHOWN.signals} signals, got ${list.count}`,
    );
  });
});
