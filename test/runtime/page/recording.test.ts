import { expect, it } from 'vitest';
import { Recording } from '../../../runtime/page/recording.js';
import { RandomBits } from '../../../runtime/random.js';
import { layoutOf } from '../../support/tables.js';

it('keeps the last cycles as they went by, whatever comes in whatever pieces', () => {
  const { inputs, outputs } = layoutOf(['a[31:0]', 'b[39:8]'], ['c[31:0]', 'd[31:0]', 'e[31:0]']);
  const shape = { inputWords: inputs.words, outputWords: outputs.words, threeValued: false };
  const recording = new Recording(shape);
  recording.restart(7);
  const random = new RandomBits(1);
  const expected: { given: number[]; gave: number[] }[] = [];
  const rowOf = (rows: Uint32Array, at: number, words: number): number[] =>
    Array.from(rows.subarray(at, at + words));
  while (expected.length < 2.5 * recording.capacity) {
    const cycles = 1 + (random.next() % 3000);
    const stride = random.next() % 2 === 0 ? 0 : inputs.words;
    const given = new Uint32Array(cycles * inputs.words);
    const gave = new Uint32Array(cycles * outputs.words);
    random.fill(given, 0, given.length);
    random.fill(gave, 0, gave.length);
    recording.add(cycles, given, stride, gave);
    for (let i = 0; i < cycles; i++) {
      expected.push({
        given: rowOf(given, i * stride, inputs.words),
        gave: rowOf(gave, i * outputs.words, outputs.words),
      });
    }
  }
  expect(recording.end).toBe(7 + expected.length);
  expect(recording.first).toBe(recording.end - recording.capacity);
  expect(recording.has(recording.first - 1)).toBe(false);
  for (let cycle = recording.first; cycle < recording.end; cycle += 11) {
    const { given, gave } = expected[cycle - 7]!;
    expect(Array.from(recording.inputRow(cycle))).toEqual(given);
    expect(inputs.ports.map((port) => recording.value(port, true, cycle))).toEqual(given);
    expect(outputs.ports.map((port) => recording.value(port, false, cycle))).toEqual(gave);
  }
});
