import { type LaneCount, laneRowStride } from './laneLayout.js';
import type { ModelLayout, RowLayout } from './layout.js';
import { fillRandomRows, RandomBits } from './random.js';

/** Turns packed rows of single lanes into lane rows (see `laneRowWords`) and back. */
export class LaneRows {
  /** 32-bit numbers from one lane row to the next. */
  readonly stride: number;
  /** 32-bit numbers from one packed row to the next. */
  readonly packedStride: number;
  readonly lanes: LaneCount;
  readonly #row: RowLayout;
  readonly #groups: number;
  /** 32-bit numbers of a word. */
  readonly #parts: number;
  readonly #square = new Uint32Array(32);

  /** For the stimulus or the response rows of a model. */
  constructor(row: RowLayout, threeValued: boolean, lanes: LaneCount) {
    this.lanes = lanes;
    this.stride = laneRowStride(row, threeValued, lanes);
    this.#row = row;
    this.#groups = threeValued ? 2 : 1;
    this.packedStride = row.words * this.#groups;
    this.#parts = lanes >>> 5;
  }

  /**
   * Lane rows of so many cycles, from packed rows for each lane that stand `packedStride` numbers
   * apart; lanes without rows get zeros. Throws RangeError for more rows than there are lanes, and
   * for too short ones.
   */
  pack(rows: readonly Uint32Array[], cycles: number): Uint32Array {
    const needed = cycles * this.packedStride;
    if (rows.length > this.lanes) {
      throw new RangeError(`there are ${this.lanes} lanes, got rows for ${rows.length}`);
    }
    const short = rows.findIndex((row) => row.length < needed);
    if (short >= 0) {
      throw new RangeError(`lane ${short} needs ${needed} numbers, got ${rows[short]!.length}`);
    }
    const target = new Uint32Array(cycles * this.stride);
    for (let cycle = 0; cycle < cycles; cycle++) this.#packRow(rows, cycle, target);
    return target;
  }

  /**
   * The packed rows of one lane, from lane rows of so many cycles. Throws RangeError for a lane that
   * is none, and for too short an array.
   */
  unpack(rows: Uint32Array, cycles: number, lane: number): Uint32Array {
    this.#checkRows(rows, cycles);
    if (!(Number.isInteger(lane) && lane >= 0 && lane < this.lanes)) {
      throw new RangeError(`lanes are 0 to ${this.lanes - 1}, got ${lane}`);
    }
    const { bits, words } = this.#row;
    const part = lane >>> 5;
    const target = new Uint32Array(cycles * this.packedStride);
    for (let cycle = 0; cycle < cycles; cycle++) {
      for (let group = 0; group < this.#groups; group++) {
        const from = cycle * this.stride + group * bits * this.#parts + part;
        const to = cycle * this.packedStride + group * words;
        for (let bit = 0; bit < bits; bit++) {
          const value = (rows[from + bit * this.#parts]! >>> (lane & 31)) & 1;
          target[to + (bit >>> 5)]! |= value << (bit & 31);
        }
      }
    }
    return target;
  }

  /** The packed rows of all lanes; `unpack` for each of them, in less time. */
  unpackAll(rows: Uint32Array, cycles: number): Uint32Array[] {
    this.#checkRows(rows, cycles);
    const targets = Array.from(
      { length: this.lanes },
      () => new Uint32Array(cycles * this.packedStride),
    );
    for (let cycle = 0; cycle < cycles; cycle++) this.#unpackRow(rows, cycle, targets);
    return targets;
  }

  /** Lane rows with the same packed rows in all lanes. Throws RangeError for too short an array. */
  spread(rows: Uint32Array, cycles: number): Uint32Array {
    return this.pack(new Array<Uint32Array>(this.lanes).fill(rows), cycles);
  }

  #packRow(rows: readonly Uint32Array[], cycle: number, target: Uint32Array): void {
    this.#eachSquare((part, word, bits, at) => {
      const square = this.#square.fill(0);
      const from = cycle * this.packedStride + word;
      const end = Math.min(32, rows.length - part * 32);
      for (let i = 0; i < end; i++) square[i] = rows[part * 32 + i]![from]!;
      transpose(square);
      const to = cycle * this.stride + at;
      for (let bit = 0; bit < bits; bit++) target[to + bit * this.#parts] = square[bit]!;
    });
  }

  #unpackRow(rows: Uint32Array, cycle: number, targets: readonly Uint32Array[]): void {
    this.#eachSquare((part, word, bits, at) => {
      const square = this.#square.fill(0);
      const from = cycle * this.stride + at;
      for (let bit = 0; bit < bits; bit++) square[bit] = rows[from + bit * this.#parts]!;
      transpose(square);
      const to = cycle * this.packedStride + word;
      for (let i = 0; i < 32; i++) targets[part * 32 + i]![to] = square[i]!;
    });
  }

  // Calls `visit` for each 32 lanes and each number of a packed row, with the bits that count in it
  // and their place in the lane row.
  #eachSquare(visit: (part: number, word: number, bits: number, laneRowAt: number) => void): void {
    const { bits, words } = this.#row;
    for (let part = 0; part < this.#parts; part++) {
      for (let group = 0; group < this.#groups; group++) {
        for (let word = 0; word < words; word++) {
          const at = (group * bits + word * 32) * this.#parts + part;
          visit(part, group * words + word, Math.min(32, bits - word * 32), at);
        }
      }
    }
  }

  #checkRows(rows: Uint32Array, cycles: number): void {
    const needed = cycles * this.stride;
    if (rows.length < needed) {
      throw new RangeError(`expected ${needed} numbers, got ${rows.length}`);
    }
  }
}

/** Lane rows for some cycles, as `LaneEngine.run` takes them. */
export interface LaneStimulusBlock {
  readonly cycles: number;
  /** The maker may use the array again when the next block is asked for. */
  readonly rows: Uint32Array;
  readonly stride: number;
}

/** Most numbers of packed rows that are made at once, all lanes together. */
const BLOCK_NUMBERS = 1 << 16;

/**
 * A stimulus that gives every input of every lane a fresh uniform bit in each cycle: lane l has the
 * one that `randomStimulus` makes of seed + l. `cycles` may be Infinity.
 */
export function* randomLaneStimulus(
  { inputs, threeValued }: ModelLayout,
  lanes: LaneCount,
  seed: number | bigint,
  cycles: number,
): Generator<LaneStimulusBlock, void, undefined> {
  const rows = new LaneRows(inputs, threeValued, lanes);
  const first = BigInt(seed);
  const random = Array.from({ length: lanes }, (_, lane) => new RandomBits(first + BigInt(lane)));
  const numbers = Math.max(1, rows.packedStride * lanes);
  const most = Math.max(1, Math.floor(BLOCK_NUMBERS / numbers));
  const packed = random.map(() => new Uint32Array(most * rows.packedStride));
  for (let left = cycles; left > 0; left -= most) {
    const count = Math.min(left, most);
    random.forEach((bits, lane) => {
      fillRandomRows(bits, inputs, packed[lane]!, count, rows.packedStride);
    });
    yield { cycles: count, rows: rows.pack(packed, count), stride: rows.stride };
  }
}

/**
 * Exchanges rows and columns of 32 × 32 bits: bit i of number j becomes bit j of number i. Swaps
 * blocks of 16, then 8, … bits (H. S. Warren, "Hacker's Delight", 2nd edition, section 7-3).
 */
function transpose(square: Uint32Array): void {
  let mask = 0x0000ffff;
  for (let half = 16; half > 0; half >>>= 1, mask ^= mask << half) {
    for (let i = 0; i < 32; i = (i + half + 1) & ~half) {
      const low = square[i]!;
      const high = square[i + half]!;
      const swapped = ((low >>> half) ^ high) & mask;
      square[i] = low ^ (swapped << half);
      square[i + half] = high ^ swapped;
    }
  }
}
