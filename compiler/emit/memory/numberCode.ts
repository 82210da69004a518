import type binaryen from 'binaryen';
import {
  FIRST_INPUT,
  firstLane,
  firstResult,
  firstState,
  type Program,
} from '../../program/program.js';

type Code = binaryen.ExpressionRef;

/** Some bits of a number, side by side, that stand side by side elsewhere too. */
interface Run {
  /** Place of the first bit in the number. */
  readonly at: number;
  readonly count: number;
  /** The first of the values, which follow one another; any for a single bit. */
  readonly first: number;
}

/** How the parts of a number are got. */
export interface NumberParts {
  /** A value of which bit 0 counts. */
  bit(value: number): Code;
  /** The bytes from one of a state bit on, as a vector. */
  stateBytes(first: number): Code;
  /** A word of the stimulus row. */
  rowWord(word: number): Code;
}

/**
 * The number that bits make, the lowest first, as one expression.
 *
 * Neighbours in the stimulus row are cut out together, and neighbouring state bits are joined
 * sixteen at a time.
 */
export function numberCode(
  { i32, i8x16 }: binaryen.Module,
  program: Program,
  bits: readonly number[],
  parts: NumberParts,
): Code {
  const rowEnd = firstLane(program);
  const codes = runsOf(program, bits).map(({ at, count, first }) => {
    let code: Code;
    if (count === 1) code = i32.and(parts.bit(bits[at]!), i32.const(1));
    else if (first < rowEnd) {
      const bit = first - FIRST_INPUT;
      const word = parts.rowWord(bit >>> 5);
      const moved = (bit & 31) === 0 ? word : i32.shr_u(word, i32.const(bit & 31));
      code = count === 32 ? moved : i32.and(moved, i32.const(2 ** count - 1));
    } else {
      const bytes = parts.stateBytes(first - firstState(program));
      const joined = i8x16.bitmask(i8x16.shl(bytes, i32.const(7)));
      code = count === 16 ? joined : i32.and(joined, i32.const(2 ** count - 1));
    }
    return at === 0 ? code : i32.shl(code, i32.const(at));
  });
  return joined(i32, codes);
}

// Balanced, so that the parts need not wait for one another.
function joined(i32: binaryen.Module['i32'], codes: readonly Code[]): Code {
  let row = [...codes];
  while (row.length > 1) {
    row = Array.from({ length: Math.ceil(row.length / 2) }, (_, i) => {
      const [first, second] = [row[2 * i]!, row[2 * i + 1]];
      return second === undefined ? first : i32.or(first, second);
    });
  }
  return row[0] ?? i32.const(0);
}

/** A vector of state bytes pays off from so many bits on. */
const LEAST_STATES = 4;

function runsOf(program: Program, bits: readonly number[]): Run[] {
  const runs: Run[] = [];
  for (let at = 0; at < bits.length; ) {
    const first = bits[at]!;
    let count = 1;
    while (at + count < bits.length && bits[at + count] === first + count) count++;
    const length = lengthOf(program, first, count);
    runs.push({ at, count: length, first });
    at += length;
  }
  return runs;
}

function lengthOf(program: Program, first: number, count: number): number {
  const rowEnd = firstLane(program);
  if (first >= FIRST_INPUT && first < rowEnd) {
    // Those in one word of the row.
    return Math.min(count, rowEnd - first, 32 - ((first - FIRST_INPUT) & 31));
  }
  if (first < firstState(program) || first >= firstResult(program)) return 1;
  const most = Math.min(count, firstResult(program) - first, 16);
  return most >= LEAST_STATES ? most : 1;
}
