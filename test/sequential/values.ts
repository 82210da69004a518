import type { Engine } from '../../runtime/engine.js';
import { type ModelLayout, rowStride } from '../../runtime/layout.js';

const X = 2;

/** Packs the bits of a row, 0, 1 or 2 for x, as stimulus. */
export function inputBits({ inputs, threeValued }: ModelLayout, bits: Uint8Array): Uint32Array {
  const packed = new Uint32Array(rowStride(inputs, threeValued));
  for (let bit = 0; bit < inputs.bits; bit++) {
    const value = bits[bit]!;
    if (value !== 0) packed[(bit >>> 5) + (value === X ? inputs.words : 0)]! |= 1 << (bit & 31);
  }
  return packed;
}

/** Runs an engine for a cycle with a packed row; its output bits, 0, 1 or 2 for x. */
export function outputBits(engine: Engine, row: Uint32Array): number[] {
  const { outputs, threeValued } = engine.layout;
  const response = new Uint32Array(rowStride(outputs, threeValued));
  engine.run(1, row, 0, response);
  const read = (word: number, bit: number): number => (response[word]! >>> (bit & 31)) & 1;
  return Array.from({ length: outputs.bits }, (_, bit) => {
    const word = bit >>> 5;
    return threeValued && read(word + outputs.words, bit) ? X : read(word, bit);
  });
}
