import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import type { Cell } from '../../../benchmarks/circuits/cells/cell.js';
import { cellNamed, cells } from '../../../benchmarks/circuits/cells/library.js';
import { libraryFiles } from '../../../benchmarks/circuits/cells/libraryFiles.js';
import { circuits } from '../../../benchmarks/circuits/index.js';
import { designWith, type Model, models } from './reading.js';

const text = (name: string): string =>
  [...libraryFiles.find((file) => file.name === name)!.chunks()].join('');

/** A netlist of one cell whose pins are the ports. */
function alone({ name, pins }: Cell, hasPower: boolean): string {
  const ports = pins.map((pin) => {
    return `${pin.direction} ${pin.width === 1 ? '' : `[${pin.width - 1}:0] `}${pin.name}`;
  });
  const supplies = hasPower ? ['vdd', 'vss'] : [];
  const connections = [...pins.map((pin) => pin.name), ...supplies].map((p) => `.${p}(${p})`);
  // The input keeps cells without pins from being a design without ports.
  return `module alone (${[...ports, 'input other'].join(', ')});
    ${hasPower ? 'supply1 vdd; supply0 vss;' : ''}
    ${name} u (${connections.join(', ')});
  endmodule`;
}

/** The cells that the reader takes: Liberty cells with three states are outside of it. */
const readable = (model: Model): readonly Cell[] =>
  model === 'liberty' ? cells.filter(({ kind }) => kind !== 'triState') : cells;

describe('the library of cells', () => {
  test('has a name for each cell and no two of a name', () => {
    expect(new Set(cells.map(({ name }) => name)).size).toBe(cells.length);
    expect(cells.length).toBeGreaterThanOrEqual(120);
    for (const cell of cells) expect(cellNamed(cell.name)).toBe(cell);
    expect(() => cellNamed('hob3_nothing')).toThrow('the library has no cell hob3_nothing');
  });

  test('has every cell in both forms, and lines of moderate length', () => {
    const verilog = text('hobnail.v');
    const liberty = text('hobnail.lib');
    for (const { name } of cells) {
      expect(verilog.split(`module ${name} (`)).toHaveLength(2);
      expect(liberty.split(`cell (${name}) {`)).toHaveLength(2);
    }
    for (const { chunks } of libraryFiles) {
      for (const chunk of chunks()) {
        for (const line of chunk.split('\n')) expect(line.length).toBeLessThan(160);
      }
    }
  });

  test.each(models)('is read without a word, cell by cell, as %s models', (model) => {
    for (const cell of readable(model)) {
      expect(() => designWith(model, alone(cell, false))).not.toThrow();
    }
  });

  test.each(['timing', 'functional'] as const)(
    'is read with power pins, cell by cell, as %s models',
    (model) => {
      for (const cell of readable(model)) {
        expect(() => designWith(model, alone(cell, true), { hasPower: true })).not.toThrow();
      }
    },
  );
});

describe('the command that writes circuits', () => {
  const write = fileURLToPath(new URL('../../../benchmarks/circuits/write.ts', import.meta.url));
  const run = (...words: string[]) =>
    spawnSync(process.execPath, ['--import', 'tsx', write, ...words], { encoding: 'utf8' });

  test('writes the files of the library into a folder', () => {
    const folder = mkdtempSync(join(tmpdir(), 'clockstride-cells-'));
    try {
      const { status, stdout, stderr } = run('cells', join(folder, 'new'));
      expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: '', stderr: '' });
      const written = readdirSync(join(folder, 'new'));
      expect(written.sort()).toEqual(libraryFiles.map(({ name }) => name).sort());
      for (const name of written) {
        expect(readFileSync(join(folder, 'new', name), 'utf8')).toBe(text(name));
      }
    } finally {
      rmSync(folder, { recursive: true });
    }
  });

  test('writes a circuit made of cells where asked for the library', () => {
    const { status, stdout, stderr } = run('counter', 'library=2');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    const counter = circuits.find(({ name }) => name === 'counter')!;
    expect(stdout).toBe([...counter.write({ library: 2 })].join(''));
    expect(stdout).toContain('hob1_flop_bank4');
    expect([...counter.write()].join('')).not.toContain('hob1_');
  });
});
