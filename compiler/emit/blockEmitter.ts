import type binaryen from 'binaryen';
import type { MemoryPlaces } from '../program/memoryPlaces.js';
import {
  FIRST_INPUT,
  firstLane,
  firstResult,
  firstState,
  isWide,
  operandCount,
  type Program,
  ProgramOp,
} from '../program/program.js';
import type { AreaLayout } from './areaLayout.js';
import type { ConstantPool } from './constantPool.js';
import { fence, STRETCH } from './fence.js';
import { type BitWindow, BlockWords } from './memory/blockWords.js';
import { numberCode } from './memory/numberCode.js';
import { pointerCode, wordCode } from './memory/wordCode.js';
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
  readonly memories: MemoryPlaces;
  readonly pool: ConstantPool;
  /** Whether operations are kept in order by fences. */
  readonly fences: boolean;
  /** Where state bits stand in locals while cycles run; in the areas unless given. */
  readonly held?: HeldStates;
}

/** First of the locals that hold the state bits before the cycle, and of those that take the next. */
export interface HeldStates {
  readonly now: number;
  readonly next: number;
}

/** Per lane of a vector, the byte of a number whose bit it takes, and the bit. */
const byteOfLane = Array.from({ length: 16 }, (_, lane) => lane >> 3);
const bitOfLane = Array.from({ length: 16 }, (_, lane) => 1 << (lane & 7));
const zeros = new Array<number>(16).fill(0);

/** Nested expressions stay below this depth, since module writers recurse over them. */
const DEPTH_LIMIT = 24;

/**
 * Emits the operations of one block as straight-line code, with a fence after each stretch. It must
 * stand in a block labelled `LEAVE`.
 *
 * A value read once becomes part of its reader's expression; others get a local. Only bit 0 of a
 * value counts: inputs are shifted down and not masked, and `not` inverts all bits.
 */
export class BlockEmitter {
  readonly statements: binaryen.ExpressionRef[] = [];
  readonly #emission: Emission;
  readonly #pointers: Pointers;
  readonly #firstLane: number;
  readonly #firstState: number;
  readonly #firstResult: number;
  readonly #start: number;
  readonly #end: number;
  #localCount: number;
  readonly #reads = new Map<number, number>();
  readonly #locals = new Map<number, number>();
  readonly #rowWords = new Map<number, number>();
  /** Locals with stretches of 32 bits of words of memories. */
  readonly #chunks = new Map<string, number>();
  readonly #words: BlockWords;
  readonly #pending = new Map<number, { code: binaryen.ExpressionRef; depth: number }>();

  /** `firstLocal` is the first number free for locals. */
  constructor(emission: Emission, block: number, pointers: Pointers, firstLocal: number) {
    this.#emission = emission;
    this.#pointers = pointers;
    this.#localCount = firstLocal;
    const { program } = emission;
    this.#firstLane = firstLane(program);
    this.#firstState = firstState(program);
    this.#firstResult = firstResult(program);
    this.#start = program.blockStart[block]!;
    this.#end = program.blockStart[block + 1]!;
    this.#words = new BlockWords(program, emission.sinks, this.#start, this.#end);
  }

  /** Locals in use so far: pointers and all. */
  get localCount(): number {
    return this.#localCount;
  }

  /** Emits all operations. Values in `kept` can be asked for afterwards with `value`. */
  emit(kept: Iterable<number> = []): void {
    this.#countReads();
    for (const value of kept) this.#reads.set(value, (this.#reads.get(value) ?? 0) + 2);
    const { module, i32, fences } = this.#emission;
    for (let i = this.#start; i < this.#end; i++) {
      this.#emitOperation(i);
      const done = i + 1 - this.#start;
      if (!fences || done % STRETCH !== 0 || i + 1 === this.#end) continue;
      this.statements.push(fence(module, i32, this.#pointers.current, done / STRETCH));
    }
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
    for (const { word } of [...this.#words.windows.values()].flat()) {
      this.#reads.set(word, (this.#reads.get(word) ?? 0) + 1);
    }
  }

  #emitOperation(operation: number): void {
    const value = this.#firstResult + operation;
    if (this.#words.isInner(operation)) return;
    for (const window of this.#words.windows.get(operation) ?? []) this.#storeBits(window);
    const stores = this.#words.storesOf(operation);
    const reads = this.#reads.get(value) ?? 0;
    const isStored = this.#emission.sinks.ofOperation[operation] !== undefined;
    if (isStored && stores === undefined && reads === 0) return;
    const { code, depth } = this.#expression(operation);
    const isWide = this.#isWide(value);
    if (stores !== undefined) {
      if (stores.length === 1 && reads === 0) this.#store(stores[0]!, code, isWide);
      else {
        const kept = this.#toLocal(value, code).code;
        this.#store(stores[0]!, kept, isWide);
        for (const offset of stores.slice(1)) this.#store(offset, this.value(value).code, isWide);
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
    if (op === ProgramOp.Pack) return this.#number(operation);
    if (op === ProgramOp.Load) return this.#address(a, b, program.c[operation]!);
    if (op === ProgramOp.Bit) return { code: this.#bitOfWord(a, program.c[operation]!), depth: 2 };
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

  #number(operation: number) {
    const { module, program, i32: type } = this.#emission;
    const { i32, local, v128 } = module;
    const { bits, rest } = this.#words.bitsOf(operation);
    let depth = 0;
    const low = numberCode(module, program, bits, {
      bit: (value) => {
        const known = this.value(value);
        depth = Math.max(depth, known.depth);
        return known.code;
      },
      stateBytes: (first) => v128.load(first, 1, local.get(this.#pointers.current, type), '0'),
      rowWord: (word) => this.#rowWord(word),
    });
    depth += 3 + Math.ceil(Math.log2(bits.length + 1));
    if (rest < FIRST_INPUT) return { code: low, depth };
    const high = this.value(rest);
    const code = i32.or(i32.shl(high.code, i32.const(bits.length)), low);
    return { code, depth: Math.max(depth, high.depth + 1) + 1 };
  }

  // Bits of a word as bytes, of which bit 0 counts: each lane is compared with its own bit.
  #storeBits({ word, firstBit, count, offset }: BitWindow): void {
    const { module, i32: type } = this.#emission;
    const { i32, i64, i8x16, i32x4, i64x2, local, v128 } = module;
    const loaded = i32.load(firstBit >>> 3, 1, this.value(word).code, '0');
    const shift = firstBit & 7;
    const bits = i32x4.splat(shift === 0 ? loaded : i32.shr_u(loaded, i32.const(shift)));
    const spread = i8x16.shuffle(bits, v128.const(zeros), byteOfLane);
    const chosen = i8x16.ne(v128.and(spread, v128.const(bitOfLane)), v128.const(zeros));
    const next = local.get(this.#pointers.next, type);
    this.statements.push(
      count === 16
        ? v128.store(offset, 1, next, chosen, '0')
        : i64.store(offset, 1, next, i64x2.extract_lane(chosen, 0), '0'),
    );
  }

  // The address of a word: that of the memory's `nowhere` if there is none.
  #address(number: number, valid: number, memory: number) {
    const { module, memories } = this.#emission;
    const { i32 } = module;
    const place = memories.places[memory]!;
    // A local, because the number is read several times.
    const { code } = this.value(number);
    const held = this.#localCount++;
    this.statements.push(module.local.set(held, code));
    const get = () => module.local.get(held, this.#emission.i32);
    const { word, isThere } = wordCode(module, place, get);
    const pointer = pointerCode(module, place, word);
    const known = valid === 1 ? undefined : this.value(valid);
    const conditions = [
      ...(isThere === undefined ? [] : [isThere]),
      ...(known === undefined ? [] : [i32.and(known.code, i32.const(1))]),
    ];
    const depth = (known?.depth ?? 0) + 4 + 3 * place.shape.indices.length;
    if (conditions.length === 0) return { code: pointer, depth };
    const condition = conditions.reduce((all, each) => i32.and(all, each));
    return { code: module.select(condition, pointer, i32.const(place.nowhere)), depth };
  }

  // A word is loaded once per block, as far as its bits are asked for.
  #bitOfWord(word: number, bit: number): binaryen.ExpressionRef {
    const { i32, local } = this.#emission.module;
    const chunk = bit >>> 5;
    const key = `${word} ${chunk}`;
    let held = this.#chunks.get(key);
    if (held === undefined) {
      held = this.#localCount++;
      this.#chunks.set(key, held);
      const pointer = this.value(word).code;
      this.statements.push(local.set(held, i32.load(chunk * 4, 1, pointer, '0')));
    }
    const bits = local.get(held, this.#emission.i32);
    return (bit & 31) === 0 ? bits : i32.shr_u(bits, i32.const(bit & 31));
  }

  #load(value: number): binaryen.ExpressionRef {
    const { i32, local } = this.#emission.module;
    if (value < FIRST_INPUT) return i32.const(-value);
    if (value < this.#firstState) {
      const lane = value - this.#firstLane;
      if (lane < 0) return this.#loadInput(value - FIRST_INPUT);
      const pointer = local.get(this.#pointers.next, this.#emission.i32);
      return i32.load8_u(this.#emission.area.slots + lane, 1, pointer, '0');
    }
    if (value < this.#firstResult) {
      const { held } = this.#emission;
      if (held) return local.get(held.now + value - this.#firstState, this.#emission.i32);
      const pointer = local.get(this.#pointers.current, this.#emission.i32);
      return i32.load8_u(value - this.#firstState, 1, pointer, '0');
    }
    const offset = this.#emission.area.wires[value - this.#firstResult]!;
    if (this.#isWide(value)) {
      return i32.load(offset, 1, local.get(this.#pointers.next, this.#emission.i32), '0');
    }
    return i32.load8_u(offset, 1, local.get(this.#pointers.next, this.#emission.i32), '0');
  }

  #loadInput(bit: number): binaryen.ExpressionRef {
    const { i32 } = this.#emission.module;
    const row = this.#rowWord(bit >>> 5);
    return (bit & 31) === 0 ? row : i32.shr_u(row, i32.const(bit & 31));
  }

  #rowWord(word: number): binaryen.ExpressionRef {
    const { i32, local } = this.#emission.module;
    let held = this.#rowWords.get(word);
    if (held === undefined) {
      held = this.#localCount++;
      this.#rowWords.set(word, held);
      const pointer = local.get(this.#pointers.row, this.#emission.i32);
      this.statements.push(local.set(held, i32.load(word * 4, 4, pointer, '0')));
    }
    return local.get(held, this.#emission.i32);
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

  #isWide(value: number): boolean {
    return isWide(this.#emission.program.op[value - this.#firstResult]!);
  }

  #store(offset: number, code: binaryen.ExpressionRef, isWide = false): void {
    const { i32, local } = this.#emission.module;
    const { held, program } = this.#emission;
    if (held && offset < program.stateCount) {
      this.statements.push(local.set(held.next + offset, code));
      return;
    }
    const pointer = local.get(this.#pointers.next, this.#emission.i32);
    this.statements.push(
      isWide ? i32.store(offset, 1, pointer, code, '0') : i32.store8(offset, 1, pointer, code, '0'),
    );
  }
}
