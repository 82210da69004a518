import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { createEngine } from '../../compiler/engines.js';
import type { RowLayout } from '../../runtime/layout.js';
import { readBits, writeBits } from '../../runtime/rowBits.js';
import { designFrom, poweredEngine } from '../support/ownCircuits.js';
import { hasPublishedCircuits, publishedCounts, publishedSource } from '../support/published.js';
import { firstDifference, randomRows, responseOf } from '../support/responses.js';

// F. Brglez, D. Bryan, K. Kozminski, "Combinational profiles of sequential benchmark circuits",
// ISCAS 1989: the circuits as published in the text form of the paper and in Verilog.
const twins = ['s27', 's641', 's1488', 's5378'];

/**
 * Published in Verilog with flip-flops of two storage nodes behind pass transistors each, and with
 * ports for the supplies. The second node holds the inverse of the flip-flop's value.
 */
const belowGates = ['s344', 's386'];

const CYCLES = 10_000;

/** Two-valued rows with their ports, all of one bit, in another order. Throws for a missing one. */
function reordered(rows: Uint32Array, from: RowLayout, to: RowLayout): Uint32Array {
  const count = rows.length / from.words;
  const moved = new Uint32Array(count * to.words);
  for (const { name, offset } of to.ports) {
    const source = from.ports.find((port) => port.name === name);
    if (source === undefined) throw new RangeError(`the twin has no port ${name}`);
    for (let row = 0; row < count; row++) {
      const bit = readBits(rows, row * from.words, source.offset, 1);
      writeBits(moved, row * to.words, offset, 1, bit);
    }
  }
  return moved;
}

describe.runIf(hasPublishedCircuits)('published circuits in Verilog', () => {
  for (const name of twins) {
    it(`${name} responds as its .bench twin for ${CYCLES} random cycles`, async () => {
      const verilog = await poweredEngine(designFrom(publishedSource(`verilog/${name}.v`)), 'wasm');
      const bench = await poweredEngine(designFrom(publishedSource(`${name}.bench`)), 'wasm');
      const [v, b] = [verilog.layout, bench.layout];
      expect([v.inputs.bits, v.outputs.bits]).toEqual([b.inputs.bits, b.outputs.bits]);
      const stimulus = randomRows(b, 1989, CYCLES);
      const expected = responseOf(bench, CYCLES, stimulus);
      const response = responseOf(verilog, CYCLES, reordered(stimulus, b.inputs, v.inputs));
      const difference = firstDifference(b, reordered(response, v.outputs, b.outputs), expected);
      expect(difference).toBe(undefined);
      // What never moves would agree with anything.
      const { words } = b.outputs;
      expect(expected.some((word, i) => word !== expected[i % words])).toBe(true);
    });
  }

  it.each(belowGates)('%s runs on latches as its .bench twin on registers', async (name) => {
    const design = designFrom(publishedSource(`verilog/${name}.v`));
    const bench = await poweredEngine(designFrom(publishedSource(`${name}.bench`)), 'wasm');
    const { registers, latches } = design.circuit;
    expect([registers.count, latches.count]).toEqual([0, 2 * publishedCounts[name]![2]]);
    const verilog = await createEngine(design, 'wasm');
    verilog.reset(powerUpState(design.circuit, 'one'));
    const [v, b] = [verilog.layout, bench.layout];
    const stimulus = randomRows(v, 1989, CYCLES);
    const expected = responseOf(bench, CYCLES, reordered(stimulus, v.inputs, b.inputs));
    const response = responseOf(verilog, CYCLES, stimulus);
    const difference = firstDifference(b, reordered(response, v.outputs, b.outputs), expected);
    expect(difference).toBe(undefined);
  });
});
