import type { Engine } from '../../runtime/engine.js';
import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import { fillRandomRows, RandomBits } from '../../runtime/random.js';

/** Packed stimulus rows of random bits; if three-valued, about one bit in eight is x. */
export function randomRows(layout: ModelLayout, seed: number, cycles: number): Uint32Array {
  const { inputs, threeValued } = layout;
  const stride = rowStride(inputs, threeValued);
  const rows = new Uint32Array(cycles * stride);
  const random = new RandomBits(seed);
  fillRandomRows(random, inputs, rows, cycles, stride);
  if (!threeValued) return rows;
  const unknown = Array.from({ length: 3 }, () => {
    const group = new Uint32Array(cycles * inputs.words);
    fillRandomRows(random, inputs, group, cycles, inputs.words);
    return group;
  });
  for (let row = 0; row < cycles; row++) {
    for (let word = 0; word < inputs.words; word++) {
      const at = row * inputs.words + word;
      const isX = unknown[0]![at]! & unknown[1]![at]! & unknown[2]![at]!;
      rows[row * stride + word]! &= ~isX;
      rows[row * stride + inputs.words + word] = isX;
    }
  }
  return rows;
}

/** Runs an engine from where it stands; returns its packed response rows. */
export function responseOf(engine: Engine, cycles: number, stimulus: Uint32Array): Uint32Array {
  const { inputs, outputs, threeValued } = engine.layout;
  const response = new Uint32Array(cycles * rowStride(outputs, threeValued));
  engine.run(cycles, stimulus, rowStride(inputs, threeValued), response);
  return response;
}

/** Where two responses first differ: `cycle 3: y[2] is 1, expected x`; undefined if nowhere. */
export function firstDifference(
  layout: ModelLayout,
  actual: Uint32Array,
  expected: Uint32Array,
): string | undefined {
  const { outputs, threeValued } = layout;
  const stride = rowStride(outputs, threeValued);
  if (actual.length !== expected.length) return `${actual.length} words, not ${expected.length}`;
  const valueAt = (rows: Uint32Array, at: number, bit: number) => {
    const bitOf = (word: number) => (rows[word + (bit >>> 5)]! >>> (bit & 31)) & 1;
    return threeValued && bitOf(at + outputs.words) === 1 ? 'x' : bitOf(at);
  };
  const word = actual.findIndex((value, i) => value !== expected[i]);
  if (word < 0) return undefined;
  const cycle = Math.floor(word / stride);
  for (const port of outputs.ports) {
    for (let i = 0; i < port.width; i++) {
      const is = valueAt(actual, cycle * stride, port.offset + i);
      const should = valueAt(expected, cycle * stride, port.offset + i);
      if (is !== should)
        return `cycle ${cycle}: bit ${i} of ${port.name} is ${is}, expected ${should}`;
    }
  }
  return `cycle ${cycle}: padding of word ${word % stride} differs`;
}
