import { firstResult, operandCount, type Program, ProgramOp } from '../../program/program.js';
import type { Sinks } from '../sinks.js';

/** Neighbouring bits of a word whose bytes are stored side by side, in one step. */
export interface BitWindow {
  /** The word's value. */
  readonly word: number;
  readonly firstBit: number;
  /** 16 or 8. */
  readonly count: number;
  /** Offset of the byte of the first bit. */
  readonly offset: number;
}

/** What a block does with numbers and words of memories, beside what each operation says. */
export class BlockWords {
  /** Windows by the operation that they stand in front of. */
  readonly windows = new Map<number, BitWindow[]>();
  readonly #program: Program;
  readonly #sinks: Sinks;
  readonly #start: number;
  readonly #end: number;
  readonly #firstResult: number;
  /** `Pack` operations that are part of another one of the block. */
  readonly #inner = new Set<number>();
  /** Stores of operations that windows make. */
  readonly #stored = new Map<number, Set<number>>();

  constructor(program: Program, sinks: Sinks, start: number, end: number) {
    this.#program = program;
    this.#sinks = sinks;
    this.#start = start;
    this.#end = end;
    this.#firstResult = firstResult(program);
    // Most programs have none of this.
    if (!program.op.subarray(start, end).some((op) => op >= ProgramOp.Pack)) return;
    this.#findInner();
    this.#findWindows();
  }

  /** Whether an operation is part of the number that another one makes. */
  isInner(operation: number): boolean {
    return this.#inner.has(operation);
  }

  /** The bits of the number that a `Pack` operation makes, the lowest first. */
  bitsOf(operation: number): { bits: number[]; rest: number } {
    const { a, b } = this.#program;
    const bits: number[] = [];
    for (let at = operation; ; at = b[at]! - this.#firstResult) {
      bits.push(a[at]!);
      if (!this.#inner.has(b[at]! - this.#firstResult)) return { bits, rest: b[at]! };
    }
  }

  /** Where the result of an operation is still to be stored; undefined for most. */
  storesOf(operation: number): readonly number[] | undefined {
    const all = this.#sinks.ofOperation[operation];
    const stored = this.#stored.get(operation);
    if (all === undefined || stored === undefined) return all;
    const left = all.filter((offset) => !stored.has(offset));
    return left.length > 0 ? left : undefined;
  }

  #findInner(): void {
    const { op, b } = this.#program;
    const reads = new Map<number, number>();
    this.#eachRead((value) => reads.set(value, (reads.get(value) ?? 0) + 1));
    for (let i = this.#start; i < this.#end; i++) {
      const inner = b[i]! - this.#firstResult;
      const isHere = op[i] === ProgramOp.Pack && inner >= this.#start && inner < i;
      if (!isHere || reads.get(b[i]!) !== 1) continue;
      if (this.#sinks.ofOperation[inner] === undefined) this.#inner.add(inner);
    }
  }

  #eachRead(read: (value: number) => void): void {
    const { op, a, b, c } = this.#program;
    const columns = [a, b, c];
    for (let i = this.#start; i < this.#end; i++) {
      for (let k = 0; k < operandCount[op[i]!]!; k++) read(columns[k]![i]!);
    }
  }

  #findWindows(): void {
    const { op, a } = this.#program;
    const byWord = new Map<number, number[]>();
    for (let i = this.#start; i < this.#end; i++) {
      if (op[i] !== ProgramOp.Bit || this.#sinks.ofOperation[i] === undefined) continue;
      const known = byWord.get(a[i]!);
      if (known === undefined) byWord.set(a[i]!, [i]);
      else known.push(i);
    }
    for (const [word, operations] of byWord) this.#windowsOf(word, operations);
  }

  #windowsOf(word: number, operations: readonly number[]): void {
    const { c } = this.#program;
    const stores = operations
      .flatMap((operation) =>
        this.#sinks.ofOperation[operation]!.map((offset) => ({
          operation,
          offset,
          bit: c[operation]!,
        })),
      )
      .sort((p, q) => p.offset - q.offset);
    for (let from = 0; from < stores.length; ) {
      const { offset, bit } = stores[from]!;
      let length = 1;
      while (
        stores[from + length]?.offset === offset + length &&
        stores[from + length]!.bit === bit + length
      ) {
        length++;
      }
      const count = length >= 16 ? 16 : length >= 8 ? 8 : 1;
      if (count > 1) {
        const covered = stores.slice(from, from + count);
        this.#add({ word, firstBit: bit, count, offset }, covered);
      }
      from += count;
    }
  }

  #add(
    window: BitWindow,
    covered: readonly { readonly operation: number; readonly offset: number }[],
  ): void {
    const first = Math.min(...covered.map(({ operation }) => operation));
    this.windows.set(first, [...(this.windows.get(first) ?? []), window]);
    for (const { operation, offset } of covered) {
      const stored = this.#stored.get(operation) ?? new Set();
      this.#stored.set(operation, stored.add(offset));
    }
  }
}
