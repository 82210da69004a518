import { describe, expect, test } from 'vitest';
import type { Cell, FlopCell, LatchCell } from '../../../benchmarks/circuits/cells/cell.js';
import {
  clockGateCells,
  flopCells,
  latchCells,
} from '../../../benchmarks/circuits/cells/sequentialCells.js';
import { RandomBits } from '../../../runtime/random.js';
import { poweredEngine } from '../../support/ownCircuits.js';
import { type PortValues, playValues, type ReadPort } from '../../support/portValues.js';
import { designWith, models } from './reading.js';

const cycles = 600;

/** Inputs that the cells of a bench share; a cell of n bits takes the last n of `d`. */
const shared = ['en', 'te', 'si', 'se', 'rst_n', 'set_n', 'clr_n', 'g'];

/** Random rows in which what is active at 0 seldom is. */
function stimulus(seed: number): Record<string, number>[] {
  const random = new RandomBits(seed);
  const bit = (onesInSixteen: number) => Number((random.next() & 15) < onesInSixteen);
  return Array.from({ length: cycles }, () => ({
    d: random.next() & 255,
    ...Object.fromEntries(shared.map((pin) => [pin, bit(pin.endsWith('_n') ? 13 : 8)])),
  }));
}

/** Pin by pin what a cell is connected to; its outputs are ports named after cell and pin. */
function instance(cell: Cell): string {
  const nets = cell.pins.map(({ name, direction, width }) => {
    if (direction === 'output') return `.${name}(${cell.name}__${name})`;
    if (/^d\d$/.test(name)) return `.${name}(d[${name[1]}])`;
    if (name === 'd') return `.d(d[${width - 1}:0])`;
    return `.${name}(${name === 'ck_n' ? 'ck' : name === 'g_n' ? 'g' : name})`;
  });
  return `${cell.name} u_${cell.name} (${nets.join(', ')});`;
}

function bench(cells: readonly Cell[]): string {
  const outputs = cells.flatMap((cell) =>
    cell.pins
      .filter(({ direction }) => direction === 'output')
      .map(({ name, width }) => `output [${width - 1}:0] ${cell.name}__${name}`),
  );
  const header = ['input ck', 'input [7:0] d', ...shared.map((pin) => `input ${pin}`), ...outputs];
  return `module bench (${header.join(', ')});\n${cells.map(instance).join('\n')}\nendmodule`;
}

/** The value of output `q` or `qn` of a cell whose bits are one port or several. */
function outputOf(cell: FlopCell | LatchCell, read: ReadPort, name: string, cycle: number) {
  const pins = cell.pins.filter((pin) => pin.name === name || pin.name.match(`^${name}\\d$`));
  const values = pins.map((pin) => read(`${cell.name}__${pin.name}`, cycle));
  return pins.length === 0 ? undefined : Number(values.reduceRight((sum, bit) => 2n * sum + bit));
}

/** What the words in the name of a cell promise of its state. */
class StateSpec {
  readonly #words: ReadonlySet<string>;
  readonly #all: number;
  state = 0;

  constructor({ family, bits }: FlopCell | LatchCell) {
    this.#words = new Set(family.split('_'));
    // The banks have these without saying so.
    if (family === 'flop_bank4') this.#words = new Set(['clear']);
    if (family === 'flop_bank8') this.#words = new Set(['enable']);
    this.#all = 2 ** bits - 1;
  }

  /** Clear goes before preset, but in the cells that are open or capture at the other level. */
  settle(row: PortValues): boolean {
    const isAsynchronous = !this.#words.has('sync');
    const clear = isAsynchronous && this.#words.has('clear') && row.clr_n === 0;
    const preset = this.#words.has('preset') && row.set_n === 0;
    const presetWins = this.#words.has('fall') || this.#words.has('low');
    if (clear && !(preset && presetWins)) this.state = 0;
    else if (preset) this.state = this.#all;
    return clear || preset;
  }

  open(row: PortValues): void {
    const isOpen = this.#words.has('low') ? row.g === 0 : row.g === 1;
    if (isOpen) this.state = Number(row.d) & this.#all;
    this.settle(row);
  }

  capture(row: PortValues): void {
    if (this.settle(row)) return;
    let next = Number(row.d) & this.#all;
    if (this.#words.has('sync') && row.rst_n === 0) next = 0;
    if (this.#words.has('enable') && row.en === 0) next = this.state;
    if (this.#words.has('scan') && row.se === 1) next = Number(row.si);
    this.state = next;
  }

  /** What `q` and `qn` are, as far as the cell has them. */
  outputs(): [q: number, qn: number] {
    return [this.state, this.#all - this.state];
  }
}

const departures = (
  cells: readonly (FlopCell | LatchCell)[],
  rows: readonly PortValues[],
  read: ReadPort,
  step: 'open' | 'capture',
): string[] =>
  cells.flatMap((cell) => {
    const spec = new StateSpec(cell);
    const wrong = rows.findIndex((row, cycle) => {
      if (step === 'open') spec.open(row);
      else spec.settle(row);
      const [q, qn] = spec.outputs();
      const seen = ['q', 'qn'].map((name) => outputOf(cell, read, name, cycle));
      if (step === 'capture') spec.capture(row);
      return seen[0] !== q || (seen[1] ?? qn) !== qn;
    });
    return wrong < 0 ? [] : [`${cell.name} in cycle ${wrong}`];
  });

describe('the cells with state', () => {
  test.each(models)('flip-flops do what their names promise, as %s models', async (model) => {
    const rows = stimulus(1);
    const design = designWith(model, bench(flopCells));
    expect(design.circuit.registers.count).toBe(flopCells.reduce((sum, c) => sum + c.bits, 0));
    const read = playValues(await poweredEngine(design, 'reference'), rows);
    expect(departures(flopCells, rows, read, 'capture')).toEqual([]);
  });

  test.each(models)('latches do what their names promise, as %s models', async (model) => {
    const rows = stimulus(2);
    const design = designWith(model, bench(latchCells));
    expect(design.circuit.latches.count).toBe(latchCells.reduce((sum, c) => sum + c.bits, 0));
    const read = playValues(await poweredEngine(design, 'reference'), rows);
    expect(departures(latchCells, rows, read, 'open')).toEqual([]);
  });

  test.each(models)(
    'clock gates let the edge pass where enabled before it, as %s models',
    async (model) => {
      const toggles = clockGateCells.map(({ name, edge }) => {
        const event = edge === 'rise' ? 'posedge' : 'negedge';
        return `wire ${name}__gck; always @(${event} ${name}__gck) ${name} <= ~${name};`;
      });
      const outputs = clockGateCells.map(({ name }) => `output reg ${name}`);
      const netlist = `module bench (input ck, en, te, ${outputs.join(', ')});
        ${toggles.join('\n')}\n${clockGateCells.map(instance).join('\n')}\nendmodule`;
      const rows = stimulus(3).map(({ en, te }): PortValues => ({ en: en!, te: te! }));
      const design = designWith(model, netlist);
      expect(design.layout.clocks).toEqual(['ck']);
      const read = playValues(await poweredEngine(design, 'reference'), rows);
      const wrong = clockGateCells.filter(({ name, family }) => {
        let state = 0n;
        return !rows.every(({ en, te }, cycle) => {
          const isRight = read(name, cycle) === state;
          if (en === 1 || (te === 1 && family.includes('test'))) state = 1n - state;
          return isRight;
        });
      });
      expect(wrong.map(({ name }) => name)).toEqual([]);
    },
  );
});
