import {
  FIRST_LANE_INPUT,
  firstLaneResult,
  firstLaneState,
  type LaneProgram,
  laneOperands,
} from '../../program/laneProgram.js';
import { type LaneStores, type Place, Region, type Store } from './laneStores.js';

/** One step of a block's code. Values stand in numbered locals, each set once. */
export type Step =
  | { readonly kind: 'constant'; readonly to: number; readonly bit: 0 | 1 }
  | ({ readonly kind: 'load'; readonly to: number } & Place)
  | ({ readonly kind: 'store'; readonly from: number } & Place)
  | {
      readonly kind: 'operate';
      readonly to: number;
      readonly op: number;
      readonly operands: readonly number[];
    };

/** The steps of a block. */
export interface BlockPlan {
  readonly steps: readonly Step[];
  /** Locals that the steps set. */
  readonly locals: number;
}

/** A program and all that the planning of its blocks looks up. */
export interface Planning {
  readonly program: LaneProgram;
  readonly stores: LaneStores;
  /** First word of the stimulus row or state area for inputs and states; see `inputSlots`. */
  readonly inputSlots: Int32Array;
  /** Per operation, the scratch word that carries its result to later blocks, or -1. */
  readonly wires: Int32Array;
}

/**
 * Plans operations `start` to `end` as one block: what is loaded and when, and which values, about
 * `kept` at a time, are kept for later operations.
 *
 * What stands in memory anyway is forgotten where room is short, the value that is read latest
 * first, and loaded again: that costs one instruction, where an engine that runs out of registers
 * spends two.
 */
export function planBlock(planning: Planning, start: number, end: number, kept: number): BlockPlan {
  const planner = new BlockPlanner(planning, kept);
  planner.countReads(start, end);
  for (let i = start; i < end; i++) planner.operation(i);
  return planner.finish();
}

/** Plans stores of values that no operation makes or reads. */
export function planCopies(planning: Planning, copies: readonly Store[]): BlockPlan {
  const planner = new BlockPlanner(planning, 0);
  for (const copy of copies) planner.store(copy);
  return planner.finish();
}

class BlockPlanner {
  readonly #planning: Planning;
  readonly #kept: number;
  readonly #firstState: number;
  readonly #firstResult: number;
  readonly #steps: Step[] = [];
  #locals = 0;
  /** Per value, the operations of the block that read it, and how many of them are done. */
  readonly #reads = new Map<number, { readonly at: number[]; done: number }>();
  /** Values at hand, by local. */
  readonly #local = new Map<number, number>();
  /** Values at hand that stand nowhere else. */
  readonly #only = new Set<number>();

  constructor(planning: Planning, kept: number) {
    this.#planning = planning;
    this.#kept = kept;
    this.#firstState = firstLaneState(planning.program);
    this.#firstResult = firstLaneResult(planning.program);
  }

  countReads(start: number, end: number): void {
    for (let i = start; i < end; i++) {
      for (const value of this.#operands(i)) {
        const known = this.#reads.get(value);
        if (known === undefined) this.#reads.set(value, { at: [i], done: 0 });
        else known.at.push(i);
      }
    }
  }

  operation(i: number): void {
    const { program, stores, wires } = this.#planning;
    const operands = this.#operands(i).map((value) => this.#atHand(value));
    const value = this.#firstResult + i;
    const to = this.#locals++;
    this.#steps.push({ kind: 'operate', to, op: program.op[i]!, operands });
    this.#local.set(value, to);
    for (const store of stores.behind[i] ?? []) this.store(store);
    const slot = wires[i]!;
    if (slot < 0) this.#only.add(value);
    else this.store({ value, region: Region.Scratch, slot });
    this.#forget(i);
  }

  store({ value, region, slot }: Store): void {
    this.#steps.push({ kind: 'store', from: this.#atHand(value), region, slot });
  }

  finish(): BlockPlan {
    return { steps: this.#steps, locals: this.#locals };
  }

  #operands(i: number): number[] {
    const { op, a, b, c } = this.#planning.program;
    return [a[i]!, b[i]!, c[i]!].slice(0, laneOperands[op[i]!]!);
  }

  #atHand(value: number): number {
    const known = this.#local.get(value);
    if (known !== undefined) return known;
    const to = this.#locals++;
    if (value < FIRST_LANE_INPUT) {
      this.#steps.push({ kind: 'constant', to, bit: value === 0 ? 0 : 1 });
    } else this.#steps.push({ kind: 'load', to, ...this.#placeOf(value) });
    this.#local.set(value, to);
    return to;
  }

  #placeOf(value: number): Place {
    const { inputSlots, wires } = this.#planning;
    if (value < this.#firstState) {
      return { region: Region.Row, slot: inputSlots[value - FIRST_LANE_INPUT]! };
    }
    if (value < this.#firstResult) {
      return { region: Region.Current, slot: value - this.#firstState };
    }
    return { region: Region.Scratch, slot: wires[value - this.#firstResult]! };
  }

  // Drops what is not read any more and, beyond the room there is, what is read latest.
  #forget(at: number): void {
    const droppable: { readonly value: number; readonly next: number }[] = [];
    let fixed = 0;
    for (const value of this.#local.keys()) {
      const next = this.#nextRead(value, at);
      if (next === undefined) this.#local.delete(value);
      else if (this.#only.has(value)) fixed++;
      else droppable.push({ value, next });
    }
    const room = Math.max(0, this.#kept - fixed);
    if (droppable.length <= room) return;
    droppable.sort((p, q) => p.next - q.next);
    for (const { value } of droppable.slice(room)) this.#local.delete(value);
  }

  #nextRead(value: number, at: number): number | undefined {
    const reads = this.#reads.get(value);
    if (reads === undefined) return undefined;
    while (reads.done < reads.at.length && reads.at[reads.done]! <= at) reads.done++;
    return reads.at[reads.done];
  }
}
