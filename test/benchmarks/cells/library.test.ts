import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { cellNamed, cells } from '../../../benchmarks/circuits/cells/library.js';
import { libraryFiles } from '../../../benchmarks/circuits/cells/libraryFiles.js';
import { circuits } from '../../../benchmarks/circuits/index.js';
import { designWith, models } from './reading.js';

const text = (name: string): string =>
  [...libraryFiles.find((file) => file.name === name)!.chunks()].join('');

/** A netlist of all cells, the pins of each connected to nets of its own. */
function allOf(hasPower: boolean): string {
  const lines = cells.map(({ name, pins }) => {
    const inputs = pins.filter(({ direction }) => direction === 'input');
    const connections = pins.map((pin) => {
      if (pin.direction === 'output') return `.${pin.name}(${name}__${pin.name})`;
      return `.${pin.name}(x[${inputs.indexOf(pin) + pin.width - 1}:${inputs.indexOf(pin)}])`;
    });
    const supplies = hasPower ? ['.vdd(vdd)', '.vss(vss)'] : [];
    return `${name} u_${name} (${[...connections, ...supplies].join(', ')});`;
  });
  const outputs = cells.flatMap(({ name, pins }) =>
    pins.flatMap((pin) =>
      pin.direction === 'output' ? [`output [${pin.width - 1}:0] ${name}__${pin.name}`] : [],
    ),
  );
  return `module all (input [15:0] x, ${outputs.join(', ')});
    ${hasPower ? 'supply1 vdd; supply0 vss;' : ''}
${lines.join('\n')}
endmodule`;
}

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

  test.each(models)('is read without a word, as %s models', (model) => {
    expect(() => designWith(model, allOf(false))).not.toThrow();
  });

  test.each(['timing', 'functional'] as const)('is read with power pins, as %s models', (model) => {
    const netlist = allOf(true);
    expect(() => designWith(model, netlist, { hasPower: true })).not.toThrow();
  });
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
