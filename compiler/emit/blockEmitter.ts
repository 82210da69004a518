import type binaryen from 'binaryen';
import {
  FIRST_INPUT,
  firstResult,
  firstState,
  operandCount,
  type Program,
  ProgramOp,
} from '../program/program.js';
import type { AreaLayout } from './areaLayout.js';
import type { Sinks } from './sinks.js';

/** The locals of a function that hold the addresses every block works with. */
export interface Pointers {
  /** Area with the state before the cycle. */
  readonly current: number;
  /** Area that takes the state after the cycle. */
  readonly next: number;
  /** This cycle's stimulus row. */
  readonly row: number;
}

/** What all blocks of one module share. */
export interface Emission {
  readonly module: binaryen.Module;
  /** The type i32, from the loaded library. */
  readonly i32: binaryen.Type;
  readonly program: Program;
  readonly area: AreaLayout;
  readonly sinks: Sinks;
}

/** Nested expressions stay below this depth, since module writers recurse over them. */
const DEPTH_LIMIT = 24;

/**
 * Emits the operations of one block as straight-line code.
 *
 * A value read once becomes part of its reader's expression; others get a local. Only bit 0 of a
 * value counts: inputs are shifted down and not masked, and `not` inverts all bits.
 */
export class BlockEmitter {
  readonly statements: binaryen.ExpressionRef[] = [];
  readonly #emission: Emission;
  readonly #pointers: Pointers;
  readonly #firstState: number;
  readonly #firstResult: number;
  readonly #start: number;
  readonly #end: number;
  #localCount: number;
  readonly #reads = new Map<number, number>();
  readonly #locals = new Map<number, number>();
  readonly #rowWords = new Map<number, number>();
  readonly #pending = new Map<number, { code: binaryen.ExpressionRef; depth: number }>();

  /** `firstLocal` is the first number free for locals. */
  constructor(emission: Emission, block: number, pointers: Pointers, firstLocal: number) {
    this.#emission = emission;
    this.#pointers = pointers;
    this.#localCount = firstLocal;
    const { program } = emission;
    this.#firstState = firstState(program);
    this.#firstResult = firstResult(program);
    this.#start = program.blockStart[block]!;
    this.#end = program.blockStart[block + 1]!;
  }

  /** Locals in use so far: pointers and all. */
  get localCount(): number {
    return this.#localCount;
  }

  /** Emits all operations. Values in `kept` can be asked for afterwards with `value`. */
  emit(kept: Iterable<number> = []): void {
    this.#countReads();
    for (const value of kept) this.#reads.set(value, (this.#reads.get(value) ?? 0) + 2);
    for (let i = this.#start; i < this.#end; i++) this.#emitOperation(i);
  }

  /** Stores a value that no operation of the block makes. */
  copy(value: number, offset: number): void {
    this.#store(offset, this.value(value).code);
  }

  /** An expression for a value, and how deep it is nested. */
  value(value: number): { code: binaryen.ExpressionRef; depth: number } {
    const { module } = this.#emission;
    const pending = this.#pending.get(value);
    if (pending !== undefined) {
      this.#pending.delete(value);
      return pending;
    }
    const local = this.#locals.get(value);
    if (local !== undefined) return { code: module.local.get(local, this.#emission.i32), depth: 0 };
    const loaded = { code: this.#load(value), depth: 2 };
    return (this.#reads.get(value) ?? 0) > 1 ? this.#toLocal(value, loaded.code) : loaded;
  }

  #countReads(): void {
    const { program } = this.#emission;
    const columns = [program.a, program.b, program.c];
    for (let i = this.#start; i < this.#end; i++) {
      for (let k = 0; k < operandCount[program.op[i]!]!; k++) {
        const operand = columns[k]![i]!;
        // A multiplexer's expression reads its 0-operand twice.
        const reads = program.op[i] === ProgramOp.Mux && k === 1 ? 2 : 1;
        this.#reads.set(operand, (this.#reads.get(operand) ?? 0) + reads);
      }
    }
  }

  #emitOperation(operation: number): void {
    const value = this.#firstResult + operation;
    const { code, depth } = this.#expression(operation);
    const stores = this.#emission.sinks.ofOperation[operation];
    const reads = this.#reads.get(value) ?? 0;
    if (stores !== undefined) {
      if (stores.length === 1 && reads === 0) this.#store(stores[0]!, code);
      else {
        const kept = this.#toLocal(value, code).code;
        this.#store(stores[0]!, kept);
        for (const offset of stores.slice(1)) this.#store(offset, this.value(value).code);
      }
    } else if (reads > 1 || depth >= DEPTH_LIMIT) {
      this.#setLocal(value, code);
    } else {
      this.#pending.set(value, { code, depth });
    }
  }

  #expression(operation: number): { code: binaryen.ExpressionRef; depth: number } {
    const { module, program } = this.#emission;
    const { i32 } = module;
    const a = program.a[operation]!;
    const b = program.b[operation]!;
    const op = program.op[operation]!;
    if (op === ProgramOp.Mux) return this.#mux(a, b, program.c[operation]!);
    const left = this.value(a);
    if (op === ProgramOp.Not) {
      return { code: i32.xor(left.code, i32.const(-1)), depth: left.depth + 1 };
    }
    const right = this.value(b);
    const depth = Math.max(left.depth, right.depth) + 1;
    if (op === ProgramOp.And) return { code: i32.and(left.code, right.code), depth };
    if (op === ProgramOp.Or) return { code: i32.or(left.code, right.code), depth };
    return { code: i32.xor(left.code, right.code), depth };
  }

  // zero ^ (select & (one ^ zero)): no branch, and any two operands may be kept inverted.
  #mux(select: number, zero: number, one: number) {
    const { i32 } = this.#emission.module;
    const first = this.value(zero);
    const other = this.value(one);
    const again = this.value(zero);
    const by = this.value(select);
    const code = i32.xor(first.code, i32.and(by.code, i32.xor(other.code, again.code)));
    return { code, depth: Math.max(first.depth, other.depth, by.depth) + 3 };
  }

  #load(value: number): binaryen.ExpressionRef {
    const { i32, local } = this.#emission.module;
    if (value < FIRST_INPUT) return i32.const(-value);
    if (value < this.#firstState) return this.#loadInput(value - FIRST_INPUT);
    if (value < this.#firstResult) {
      const pointer = local.get(this.#pointers.current, this.#emission.i32);
      return i32.load8_u(value - this.#firstState, 1, pointer, '0');
    }
    const offset = this.#emission.area.wires[value - this.#firstResult]!;
    return i32.load8_u(offset, 1, local.get(this.#pointers.next, this.#emission.i32), '0');
  }

  #loadInput(bit: number): binaryen.ExpressionRef {
    const { i32, local } = this.#emission.module;
    const word = bit >>> 5;
    let held = this.#rowWords.get(word);
    if (held === undefined) {
      held = this.#localCount++;
      this.#rowWords.set(word, held);
      const pointer = local.get(this.#pointers.row, this.#emission.i32);
      this.statements.push(local.set(held, i32.load(word * 4, 4, pointer, '0')));
    }
    const row = local.get(held, this.#emission.i32);
    return (bit & 31) === 0 ? row : i32.shr_u(row, i32.const(bit & 31));
  }

  #setLocal(value: number, code: binaryen.ExpressionRef): number {
    const number = this.#localCount++;
    this.#locals.set(value, number);
    this.statements.push(this.#emission.module.local.set(number, code));
    return number;
  }

  #toLocal(value: number, code: binaryen.ExpressionRef) {
    const number = this.#setLocal(value, code);
    return { code: this.#emission.module.local.get(number, this.#emission.i32), depth: 0 };
  }

  #store(offset: number, code: binaryen.ExpressionRef): void {
    const { i32, local } = this.#emission.module;
    const pointer = local.get(this.#pointers.next, this.#emission.i32);
    this.statements.push(i32.store8(offset, 1, pointer, code, '0'));
  }
}
