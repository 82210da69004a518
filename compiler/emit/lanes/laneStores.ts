import { laneWordOf } from '../../../runtime/laneLayout.js';
import type { RowLayout } from '../../../runtime/layout.js';
import { firstLaneResult, type LaneProgram, laneOperands } from '../../program/laneProgram.js';

/** Parts of memory that the code of a cycle reads and writes, each through a pointer of its own. */
export const Region = {
  /** State before the cycle. */
  Current: 0,
  /** State after the cycle. */
  Next: 1,
  /** The stimulus row. */
  Row: 2,
  /** The response row. */
  Response: 3,
  /** What passes from one function to another, and faults. */
  Scratch: 4,
} as const;

/** A word in a region. */
export interface Place {
  readonly region: number;
  readonly slot: number;
}

/** A value that is stored. */
export interface Store extends Place {
  readonly value: number;
}

/** What a cycle stores, and when. */
export interface LaneStores {
  /**
   * Per operation, the stores behind it: of its result, and of operands that it is the first to
   * read; undefined for most.
   */
  readonly behind: readonly (readonly Store[] | undefined)[];
  /** Stores of inputs, states and constants that no operation reads. */
  readonly rest: readonly Store[];
}

/** Lists the stores of a program: next states, the response, and faults in the first scratch words. */
export function laneStores(
  program: LaneProgram,
  outputs: RowLayout,
  firstFault: number,
): LaneStores {
  const first = firstLaneResult(program);
  const readBy = firstReaders(program);
  const behind: Store[][] = new Array(program.op.length);
  const rest: Store[] = [];
  const add = (value: number, region: number, slot: number): void => {
    const operation = value >= first ? value - first : (readBy.get(value) ?? -1);
    if (operation < 0) rest.push({ value, region, slot });
    else {
      behind[operation] ??= [];
      behind[operation].push({ value, region, slot });
    }
  };
  for (const [bit, value] of program.next.entries()) add(value, Region.Next, bit);
  for (const [bit, value] of program.outputs.entries()) {
    const slot = laneWordOf(outputs, bit);
    if (slot >= 0) add(value, Region.Response, slot);
  }
  for (const [fault, { when }] of program.faults.entries()) {
    add(when, Region.Scratch, firstFault + fault);
  }
  return { behind, rest };
}

// For inputs and states, the first operation that reads each.
function firstReaders(program: LaneProgram): Map<number, number> {
  const columns = [program.a, program.b, program.c];
  const first = firstLaneResult(program);
  const readBy = new Map<number, number>();
  for (let i = 0; i < program.op.length; i++) {
    for (let k = 0; k < laneOperands[program.op[i]!]!; k++) {
      const value = columns[k]![i]!;
      if (value > 1 && value < first && !readBy.has(value)) readBy.set(value, i);
    }
  }
  return readBy;
}
