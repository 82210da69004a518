import { describe, expect, it } from 'vitest';
import { engineNames } from '../../compiler/engines.js';
import { rowStride } from '../../runtime/layout.js';
import { heldStimulus, runBlocksSync } from '../../runtime/stream.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { playValues } from '../support/portValues.js';

interface Sequence {
  /** The polynomial is x^order + x^tap + 1. */
  readonly order: number;
  readonly tap: number;
  readonly inverted: boolean;
}

// ITU-T O.150 (1996), section 5, "Digital test patterns" (values from memory); that of order 7 is
// common practice beside them.
const sequences: readonly Sequence[] = [
  { order: 7, tap: 6, inverted: false },
  { order: 9, tap: 5, inverted: false },
  { order: 15, tap: 14, inverted: true },
  { order: 20, tap: 3, inverted: false },
  { order: 23, tap: 18, inverted: true },
  { order: 31, tap: 28, inverted: true },
];

/** What a whole period and one more cycle look like. */
interface Observation {
  /** Cycles in which the register holds what it started with. */
  readonly returns: readonly number[];
  /** Ones of the line in one period, and its longest run of zeros, counted around the end. */
  readonly ones: number;
  readonly longestZeros: number;
}

/** Runs the compiled model for a period and one cycle, looking at every row. */
async function observe(order: number): Promise<Observation> {
  const engine = await poweredEngine(ownDesign('prbs', { order }), 'wasm');
  const { layout } = engine;
  const period = 2 ** order - 1;
  const start = 2 ** order - 1;
  // One word a row: the line in bit 0, the register above it.
  expect(layout.outputs.ports.map(({ name, offset }) => [name, offset])).toEqual([
    ['serial', 0],
    ['state', 1],
  ]);
  expect(rowStride(layout.outputs, false)).toBe(1);
  const returns: number[] = [];
  const line = new Uint8Array(period);
  for (const { firstCycle, cycles, rows } of runBlocksSync(
    engine,
    heldStimulus(layout, period + 1),
  )) {
    for (let i = 0; i < cycles; i++) {
      const word = rows[i]!;
      if (firstCycle + i < period) line[firstCycle + i] = word & 1;
      if (word >>> 1 === start) returns.push(firstCycle + i);
    }
  }
  return { returns, ...countsOf(line) };
}

function countsOf(line: Uint8Array): { ones: number; longestZeros: number } {
  let ones = 0;
  let run = 0;
  let longestZeros = 0;
  const first = line.indexOf(1);
  for (let i = 0; i < line.length; i++) {
    const bit = line[(first + i) % line.length]!;
    ones += bit;
    run = bit === 1 ? 0 : run + 1;
    longestZeros = Math.max(longestZeros, run);
  }
  return { ones, longestZeros };
}

describe('the bit sequences of ITU-T O.150', () => {
  // The recommendation gives for each sequence its length, 2^n - 1, and its longest run of zeros:
  // n - 1, and n where the line signal is inverted. That a period has one more of the stages' ones
  // than of their zeros: S. Golomb, "Shift Register Sequences", 1967, on the balance property.
  for (const { order, inverted } of sequences.filter((s) => s.order <= 23)) {
    it(`has the period, the ones and the zeros of order ${order}`, async () => {
      expect(await observe(order)).toEqual({
        returns: [0, 2 ** order - 1],
        ones: 2 ** (order - 1) - (inverted ? 1 : 0),
        longestZeros: inverted ? order : order - 1,
      });
    });
  }

  for (const { order, tap, inverted } of sequences) {
    it.each(engineNames)(
      `sends what the polynomial of order ${order} says, on %s`,
      async (name) => {
        const count = name === 'wasm' ? 100_000 : 5_000;
        const engine = await poweredEngine(ownDesign('prbs', { order }), name);
        const read = playValues(engine, new Array(count).fill({}));
        const bits: number[] = new Array(order).fill(1);
        while (bits.length < count) bits.push(bits.at(-order)! ^ bits.at(-tap)!);
        const line = Array.from({ length: count }, (_, i) => Number(read('serial', i)));
        expect(line).toEqual(inverted ? bits.map((bit) => 1 - bit) : bits);
      },
    );
  }
});
