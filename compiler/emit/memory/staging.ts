import {
  FIRST_INPUT,
  firstLane,
  firstResult,
  firstState,
  type Program,
} from '../../program/program.js';

/** Bits that a write takes: constants, or bits that stand side by side. */
export interface StagedBits {
  readonly values: readonly number[];
  /**
   * Where they stand: as bytes of the area after the cycle or before it, or as bits of the stimulus
   * row.
   */
  readonly home: 'constant' | 'next' | 'current' | 'row';
  /** Offset of the byte of the first bit; its number in the row. */
  readonly first: number;
}

/** The bits of a write, by the names of `LogicWrite`. */
export interface StagedWrite {
  readonly memory: number;
  readonly enable: StagedBits;
  readonly surely: StagedBits;
  readonly address: StagedBits;
  readonly addressUnknown: StagedBits;
  readonly data: StagedBits;
  readonly dataUnknown: StagedBits;
  readonly mask: StagedBits;
  readonly maskSurely: StagedBits;
}

/** Where the bits wait that the writes at the end of a cycle need. */
export interface Staging {
  readonly writes: readonly StagedWrite[];
  /** Values, and the offsets of the bytes that take them. */
  readonly stores: readonly (readonly [value: number, offset: number])[];
  readonly end: number;
}

const isConstant = (value: number): boolean => value < FIRST_INPUT;

/**
 * Lays out the bits of writes from an offset on; equal ones stand there once. State bits, bits of
 * the stimulus row and lanes of vectors (from `slots` on) that are neighbours stay where they are.
 */
export function stageWrites(program: Program, slots: number, start: number): Staging {
  const known = new Map<string, StagedBits>();
  const stores: [number, number][] = [];
  let end = start;
  const stage = (values: readonly number[]): StagedBits => {
    const key = values.join();
    const before = known.get(key);
    if (before !== undefined) return before;
    const staged = homeOf(program, values, slots) ?? { values, home: 'next', first: end };
    known.set(key, staged);
    if (staged.home !== 'next' || staged.first !== end) return staged;
    for (const [i, value] of values.entries()) stores.push([value, end + i]);
    end += values.length;
    return staged;
  };
  const writes = program.writes.map((write) => ({
    memory: write.memory,
    enable: stage([write.enable]),
    surely: stage([write.surely]),
    address: stage(write.address),
    addressUnknown: stage(write.addressUnknown),
    data: stage(write.data),
    dataUnknown: stage(write.dataUnknown),
    mask: stage(write.mask),
    maskSurely: stage(write.maskSurely),
  }));
  // Sixteen bytes are looked at together, so that the last bits must have some bytes behind them.
  return { writes, stores, end: writes.length === 0 ? start : end + 16 };
}

/** Where bits stand side by side that need no place of their own. */
function homeOf(
  program: Program,
  values: readonly number[],
  slots: number,
): StagedBits | undefined {
  if (values.every(isConstant)) return { values, home: 'constant', first: 0 };
  const [first] = values;
  if (first === undefined || !values.every((value, i) => value === first + i)) return undefined;
  const last = first + values.length - 1;
  const lanes = firstLane(program);
  const states = firstState(program);
  if (first >= FIRST_INPUT && last < lanes)
    return { values, home: 'row', first: first - FIRST_INPUT };
  if (first >= lanes && last < states)
    return { values, home: 'next', first: slots + first - lanes };
  if (first < states || last >= firstResult(program)) return undefined;
  return { values, home: 'current', first: first - states };
}
