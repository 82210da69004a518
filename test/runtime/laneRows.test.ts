import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type LaneCount, laneRowStride, laneWordOf } from '../../runtime/laneLayout.js';
import { LaneRows, randomLaneStimulus } from '../../runtime/laneRows.js';
import { layRow, type ModelLayout, type RowLayout } from '../../runtime/layout.js';
import { randomStimulus } from '../../runtime/stream.js';
import { ownDesign } from '../support/ownCircuits.js';

const rowOf = (width: number): RowLayout =>
  layRow([{ name: 'p', width, msb: width - 1, lsb: 0, isVector: true }]);

const shapes = fc.record({
  width: fc.integer({ min: 1, max: 100 }),
  threeValued: fc.boolean(),
  lanes: fc.constantFrom<LaneCount>(32, 64, 128),
  cycles: fc.integer({ min: 0, max: 3 }),
  seed: fc.nat(1e9),
});

/** Packed rows of random bits; bits that fill up a word are 0. */
function packedRows(row: RowLayout, groups: number, cycles: number, seed: number): Uint32Array {
  const rows = new Uint32Array(cycles * groups * row.words);
  return rows.map((_, i) => {
    const rest = (i % row.words === row.words - 1 && row.bits % 32) || 32;
    const word = Math.imul(seed + i * 7919 + 1, 0x9e3779b1) >>> 0;
    return word >>> (32 - rest);
  });
}

describe('lane rows', () => {
  it('hold bit b of lane l in bit l of word b, and give it back', () => {
    fc.assert(
      fc.property(shapes, ({ width, threeValued, lanes, cycles, seed }) => {
        const row = rowOf(width);
        const groups = threeValued ? 2 : 1;
        const rows = new LaneRows(row, threeValued, lanes);
        const packed = Array.from({ length: lanes }, (_, lane) =>
          packedRows(row, groups, cycles, seed + lane * 31),
        );
        const laid = rows.pack(packed, cycles);
        expect(laid.length).toBe(cycles * laneRowStride(row, threeValued, lanes));
        for (let i = 0; i < cycles * groups * row.words * 32; i += 7) {
          const cycle = Math.floor(i / (groups * row.words * 32));
          const bit = i % (groups * row.words * 32);
          const word = laneWordOf(row, bit);
          if (word < 0) continue;
          const lane = (i * 13) % lanes;
          const at = cycle * rows.stride + (word * lanes) / 32 + (lane >>> 5);
          const expected = (packed[lane]![cycle * rows.packedStride + (bit >>> 5)]! >>> bit) & 1;
          expect((laid[at]! >>> (lane & 31)) & 1).toBe(expected);
        }
        expect(rows.unpackAll(laid, cycles)).toEqual(packed);
        expect(rows.unpack(laid, cycles, lanes - 1)).toEqual(packed[lanes - 1]);
        expect(rows.spread(packed[0]!, cycles)).toEqual(
          rows.pack(
            packed.map(() => packed[0]!),
            cycles,
          ),
        );
      }),
      { seed: 61, numRuns: 60 },
    );
  });

  it('have zeros for lanes without rows', () => {
    const rows = new LaneRows(rowOf(3), false, 64);
    const laid = rows.pack([Uint32Array.of(7)], 1);
    expect([...laid]).toEqual([1, 0, 1, 0, 1, 0]);
  });

  it('refuse what does not fit', () => {
    const rows = new LaneRows(rowOf(40), false, 32);
    const row = new Uint32Array(2);
    expect(() => rows.pack(new Array(33).fill(row), 1)).toThrow(
      'there are 32 lanes, got rows for 33',
    );
    expect(() => rows.pack([row, new Uint32Array(1)], 1)).toThrow('lane 1 needs 2 numbers, got 1');
    expect(() => rows.unpackAll(new Uint32Array(39), 1)).toThrow('expected 40 numbers, got 39');
    expect(() => rows.unpack(new Uint32Array(40), 1, 32)).toThrow('lanes are 0 to 31, got 32');
  });
});

describe('randomLaneStimulus', () => {
  it.each([
    [32, 40],
    [128, 2500],
  ] as const)('gives each of %i lanes the rows of its own seed', (lanes, cycles) => {
    const { layout } = ownDesign('uart');
    const rows = new LaneRows(layout.inputs, false, lanes);
    const packed = Array.from({ length: lanes }, (): number[] => []);
    for (const block of randomLaneStimulus(layout, lanes, 9, cycles)) {
      rows.unpackAll(block.rows, block.cycles).forEach((each, lane) => {
        packed[lane]!.push(...each);
      });
    }
    for (const lane of [0, 1, lanes - 1]) {
      const alone = [...randomStimulus(layout, 9 + lane, cycles)].flatMap((block) =>
        Array.from(block.rows.subarray(0, block.cycles * block.stride)),
      );
      expect(packed[lane]).toEqual(alone);
    }
  });

  it('needs no inputs', () => {
    const { layout } = ownDesign('uart');
    const bare: ModelLayout = { ...layout, inputs: layRow([]) };
    const blocks = [...randomLaneStimulus(bare, 64, 1, 5)];
    expect(blocks.reduce((sum, { cycles }) => sum + cycles, 0)).toBe(5);
  });
});
