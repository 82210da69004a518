import { LaneOp } from '../../program/laneProgram.js';
import type { Step } from './planBlock.js';

/** An instruction as an optimizing engine sees it: values by number, -1 for no result. */
interface Instruction {
  readonly result: number;
  readonly reads: readonly number[];
  /** Loads and stores keep their order; all else is moved. */
  readonly isFixed: boolean;
}

/**
 * How many instructions an engine adds to the steps of a block because it runs out of registers.
 *
 * Loads and stores keep their order. Other instructions stand, in V8's optimizing compiler, as late
 * as their readers allow: its scheduler goes through a block from its end and takes each instruction
 * when all its readers have been taken, first come, first served. What is to make room is the value
 * that is read latest (L. A. Belady, "A study of replacement algorithms for a virtual-storage
 * computer", IBM Systems Journal 5(2), 1966), stored once and loaded where it is read again.
 */
export function spillsOf(steps: readonly Step[], registers: number): number {
  const order = movedDown(instructionsOf(steps));
  const allocation = new Allocation(order, registers);
  order.forEach((_, at) => {
    allocation.step(at);
  });
  return allocation.spills;
}

function instructionsOf(steps: readonly Step[]): Instruction[] {
  const instructions: Instruction[] = [];
  let values = steps.reduce((most, step) => ('to' in step ? Math.max(most, step.to + 1) : most), 0);
  for (const step of steps) {
    if (step.kind === 'store') {
      instructions.push({ result: -1, reads: [step.from], isFixed: true });
    } else if (step.kind !== 'operate') {
      instructions.push({ result: step.to, reads: [], isFixed: step.kind === 'load' });
    } else if (step.op === LaneOp.Mux || step.op === LaneOp.MuxNot) {
      const [select, zero, one] = step.operands as [number, number, number];
      const [difference, masked] = [values, values + 1];
      values += 2;
      instructions.push(
        { result: difference, reads: [one, zero], isFixed: false },
        { result: masked, reads: [select, difference], isFixed: false },
        { result: step.to, reads: [zero, masked], isFixed: false },
      );
    } else {
      instructions.push({ result: step.to, reads: step.operands, isFixed: false });
    }
  }
  return instructions;
}

function movedDown(instructions: readonly Instruction[]): Instruction[] {
  const madeBy = new Map(instructions.map(({ result }, at) => [result, at]));
  const waiting = new Int32Array(instructions.length);
  const fixedBefore = new Int32Array(instructions.length).fill(-1);
  let last = -1;
  for (const [at, { reads, isFixed }] of instructions.entries()) {
    for (const value of reads) waiting[madeBy.get(value)!]!++;
    if (!isFixed) continue;
    fixedBefore[at] = last;
    if (last >= 0) waiting[last]!++;
    last = at;
  }
  const taken = last < 0 ? [] : [last];
  const take = (at: number): void => {
    waiting[at]!--;
    if (waiting[at] === 0) taken.push(at);
  };
  for (let i = 0; i < taken.length; i++) {
    const at = taken[i]!;
    for (const value of instructions[at]!.reads) take(madeBy.get(value)!);
    if (fixedBefore[at]! >= 0) take(fixedBefore[at]!);
  }
  return taken.reverse().map((at) => instructions[at]!);
}

/** The registers of an engine while it goes through instructions. */
class Allocation {
  spills = 0;
  readonly #order: readonly Instruction[];
  readonly #registers: number;
  /** Per value, the places that read it, and how many of them are done. */
  readonly #reads = new Map<number, { readonly at: number[]; done: number }>();
  readonly #held = new Set<number>();
  readonly #stored = new Set<number>();

  constructor(order: readonly Instruction[], registers: number) {
    this.#order = order;
    this.#registers = registers;
    for (const [at, { reads }] of order.entries()) {
      for (const value of reads) {
        const known = this.#reads.get(value);
        if (known === undefined) this.#reads.set(value, { at: [at], done: 0 });
        else known.at.push(at);
      }
    }
  }

  step(at: number): void {
    const { result, reads } = this.#order[at]!;
    for (const value of reads) {
      if (this.#held.has(value)) continue;
      this.#makeRoom(at, reads);
      this.#held.add(value);
      this.spills++;
    }
    for (const value of reads) {
      if (this.#nextRead(value, at) === Number.POSITIVE_INFINITY) this.#held.delete(value);
    }
    if (result < 0 || this.#nextRead(result, at) === Number.POSITIVE_INFINITY) return;
    this.#makeRoom(at, []);
    this.#held.add(result);
  }

  #makeRoom(at: number, needed: readonly number[]): void {
    while (this.#held.size >= this.#registers) {
      let [latest, next] = [-1, -1];
      for (const value of this.#held) {
        const read = needed.includes(value) ? -1 : this.#nextRead(value, at);
        if (read > next) [latest, next] = [value, read];
      }
      if (latest < 0) return;
      this.#held.delete(latest);
      if (this.#stored.has(latest)) continue;
      this.#stored.add(latest);
      this.spills++;
    }
  }

  #nextRead(value: number, at: number): number {
    const reads = this.#reads.get(value);
    if (reads === undefined) return Number.POSITIVE_INFINITY;
    while (reads.done < reads.at.length && reads.at[reads.done]! <= at) reads.done++;
    return reads.at[reads.done] ?? Number.POSITIVE_INFINITY;
  }
}
