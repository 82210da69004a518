import type binaryen from 'binaryen';
import { firstState } from '../program/program.js';
import {
  isNumber,
  type RowSink,
  stepOperands,
  type VectorCode,
  VectorOp,
  type VectorSink,
} from '../program/vectorCode.js';
import type { Emission, Pointers } from './blockEmitter.js';
import { pickBits, rowBytes } from './inputLanes.js';
import { LANES } from './lanes.js';
import { numberCode, numericCode } from './numericCode.js';
import { storeHalf } from './packOutputs.js';
import { shuffled } from './shuffled.js';
import type { StepHomes, VectorPart } from './vectorParts.js';

/** Words of 32 bits in a vector. */
const WORDS = 4;

/** Nested expressions stay below this depth, since module writers recurse over them. */
const DEPTH_LIMIT = 24;

/** The locals that vector code works with: those of every block, and the response row. */
export interface VectorPointers extends Pointers {
  readonly response: number;
}

/** The types of the loaded library that vector code needs. */
export interface VectorTypes {
  readonly i32: binaryen.Type;
  readonly i64: binaryen.Type;
  readonly v128: binaryen.Type;
}

/**
 * Emits vector steps as straight-line code. A result read once becomes part of its reader's
 * expression; others get a local. Stores keep things in order well enough: fences cost more here than
 * they save.
 */
export class VectorEmitter {
  readonly statements: binaryen.ExpressionRef[] = [];
  /** Types of the locals in use, from `firstLocal` on. */
  readonly locals: binaryen.Type[] = [];
  readonly #emission: Emission;
  readonly #code: VectorCode;
  readonly #types: VectorTypes;
  readonly #pointers: VectorPointers;
  readonly #homes: StepHomes;
  readonly #firstLocal: number;
  readonly #reads = new Map<number, number>();
  readonly #locals = new Map<number, number>();
  readonly #pending = new Map<number, { code: binaryen.ExpressionRef; depth: number }>();

  constructor(
    emission: Emission,
    types: VectorTypes,
    pointers: VectorPointers,
    homes: StepHomes,
    firstLocal: number,
  ) {
    this.#emission = emission;
    this.#code = emission.program.vectors!;
    this.#types = types;
    this.#pointers = pointers;
    this.#homes = homes;
    this.#firstLocal = firstLocal;
  }

  /** Emits the steps of a part, and the sinks if it is the last part. */
  emit({ start, end }: VectorPart, sinks: Pick<VectorCode, 'states' | 'outputs' | 'rows'>): void {
    const { steps } = this.#code;
    const count = (step: number, reads = 1): void => {
      this.#reads.set(step, (this.#reads.get(step) ?? 0) + reads);
    };
    for (let step = start; step < end; step++) {
      const { op, a, b, c } = steps[step]!;
      // A shuffle of one vector names it twice, but takes it once.
      const operands = op === VectorOp.Shuffle && a === b ? [a] : [a, b, c];
      for (const operand of operands.slice(0, stepOperands[op])) count(operand);
      // A multiplexer's expression reads its 0-operand twice, a doubling what it doubles.
      if (op === VectorOp.Mux) count(b);
      if (op === VectorOp.Stack) count(a);
    }
    const stores = new Map<number, (() => void)[]>();
    const add = (sink: { readonly step: number }, reads: number, store: () => void): void => {
      count(sink.step, reads);
      // What stands in memory, or was made by an earlier part, can be stored at any time.
      const step = Math.max(sink.step, start);
      stores.set(step, [...(stores.get(step) ?? []), store]);
    };
    for (const sink of sinks.states) add(sink, 1, () => this.#storeState(sink));
    for (const sink of sinks.outputs) add(sink, 1, () => this.#storeOutputs(sink));
    for (const sink of sinks.rows) {
      const isWhole = sink.words.length === WORDS;
      add(sink, isWhole ? 1 : sink.words.length, () => this.#storeRow(sink, isWhole));
    }
    for (let step = start; step < end; step++) {
      this.#emitStep(step);
      for (const store of stores.get(step) ?? []) store();
    }
  }

  #emitStep(step: number): void {
    const { op } = this.#code.steps[step]!;
    // What stands in memory is loaded where it is read.
    if (op === VectorOp.State || op === VectorOp.Slot || op === VectorOp.Constant) return;
    const slot = this.#homes.slotOf[step]!;
    const reads = this.#reads.get(step) ?? 0;
    if (reads === 0 && slot < 0) return;
    const { code, depth } = this.#expression(step);
    if (slot >= 0) {
      const kept = reads > 0 ? this.#toLocal(step, code) : code;
      this.#store(this.#emission.area.slots + slot * LANES, kept, isNumber(op));
    } else if (reads > 1 || depth >= DEPTH_LIMIT) this.#setLocal(step, code);
    else this.#pending.set(step, { code, depth });
  }

  #value(step: number): { code: binaryen.ExpressionRef; depth: number } {
    const { op, lanes } = this.#code.steps[step]!;
    if (op === VectorOp.Constant) {
      return { code: numberCode(this.#emission.module, lanes), depth: 1 };
    }
    const pending = this.#pending.get(step);
    if (pending !== undefined) {
      this.#pending.delete(step);
      return pending;
    }
    const held = this.#locals.get(step);
    if (held !== undefined) {
      return { code: this.#emission.module.local.get(held, this.#typeOf(step)), depth: 0 };
    }
    const loaded = { code: this.#load(step), depth: 2 };
    if ((this.#reads.get(step) ?? 0) <= 1) return loaded;
    return { code: this.#toLocal(step, loaded.code), depth: 0 };
  }

  #load(step: number): binaryen.ExpressionRef {
    const { i64, v128 } = this.#emission.module;
    const { op, a } = this.#code.steps[step]!;
    if (op === VectorOp.State) return v128.load(a, 1, this.#at(this.#pointers.current), '0');
    if (op === VectorOp.Splat) return this.#splat(a);
    const slot = op === VectorOp.Slot ? a : this.#homes.slotOf[step]!;
    const address = this.#emission.area.slots + slot * LANES;
    const pointer = this.#at(this.#pointers.next);
    return isNumber(op) ? i64.load(address, 4, pointer, '0') : v128.load(address, 4, pointer, '0');
  }

  #expression(step: number): { code: binaryen.ExpressionRef; depth: number } {
    const { module, pool } = this.#emission;
    const { v128 } = module;
    const { op, a, b, c, lanes } = this.#code.steps[step]!;
    if (op === VectorOp.Splat) return { code: this.#splat(a), depth: 2 };
    if (op === VectorOp.RowBytes) {
      const row = () => this.#at(this.#pointers.row);
      return { code: rowBytes(module, pool, lanes, row), depth: 6 };
    }
    if (op === VectorOp.Mux) return this.#mux(a, b, c);
    if (op === VectorOp.Stack) return this.#stack(a, b);
    if (op >= VectorOp.Number) return this.#numeric(step);
    const left = this.#value(a);
    if (op === VectorOp.Invert) {
      const mask = constant(
        module,
        lanes.map((lane) => (lane === 1 ? 0xff : 0)),
      );
      return { code: v128.xor(left.code, mask), depth: left.depth + 1 };
    }
    if (op === VectorOp.Pick) {
      return { code: pickBits(module, left.code, lanes), depth: left.depth + 2 };
    }
    if (op === VectorOp.Shuffle && a === b) {
      return { code: shuffled(module, pool, lanes, left.code), depth: left.depth + 1 };
    }
    const right = this.#value(b);
    const depth = Math.max(left.depth, right.depth) + 1;
    const code =
      op === VectorOp.Shuffle
        ? shuffled(module, pool, lanes, left.code, right.code)
        : op === VectorOp.And
          ? v128.and(left.code, right.code)
          : op === VectorOp.AndNot
            ? v128.andnot(left.code, right.code)
            : op === VectorOp.Or
              ? v128.or(left.code, right.code)
              : v128.xor(left.code, right.code);
    return { code, depth };
  }

  // zero ^ (select & (one ^ zero))
  #mux(select: number, zero: number, one: number) {
    const { v128 } = this.#emission.module;
    const first = this.#value(zero);
    const other = this.#value(one);
    const again = this.#value(zero);
    const by = this.#value(select);
    const code = v128.xor(first.code, v128.and(by.code, v128.xor(other.code, again.code)));
    return { code, depth: Math.max(first.depth, other.depth, by.depth) + 3 };
  }

  #stack(higher: number, lowest: number) {
    const { module } = this.#emission;
    const { v128, i8x16 } = module;
    const [once, again] = [this.#value(higher), this.#value(higher)];
    const bits = this.#value(lowest);
    const ones = constant(module, new Array<number>(LANES).fill(1));
    const code = v128.or(i8x16.add(once.code, again.code), v128.and(bits.code, ones));
    return { code, depth: Math.max(once.depth, bits.depth + 1) + 2 };
  }

  #numeric(step: number): { code: binaryen.ExpressionRef; depth: number } {
    const { module } = this.#emission;
    const { op, a, b, lanes } = this.#code.steps[step]!;
    const { code, depth } = this.#value(a);
    const other = stepOperands[op] === 2 ? this.#value(b) : undefined;
    return {
      code: numericCode(module, op, code, other?.code, lanes[0]),
      depth: Math.max(depth, other?.depth ?? 0) + 3,
    };
  }

  #splat(value: number): binaryen.ExpressionRef {
    const { module, program, area } = this.#emission;
    const { v128, i8x16, i32 } = module;
    if (value < 2) return constant(module, new Array<number>(LANES).fill(value));
    const input = value - 2;
    const states = firstState(program);
    if (value >= states) {
      return v128.load8_splat(value - states, 1, this.#at(this.#pointers.current), '0');
    }
    if (input >= this.#code.rowInputs) {
      const lane = area.slots + input - this.#code.rowInputs;
      return v128.load8_splat(lane, 1, this.#at(this.#pointers.next), '0');
    }
    const byte = i32.load8_u(input >>> 3, 1, this.#at(this.#pointers.row), '0');
    return i8x16.splat(input % 8 === 0 ? byte : i32.shr_u(byte, i32.const(input % 8)));
  }

  #storeState({ step, invert, to }: VectorSink): void {
    const { v128, local } = this.#emission.module;
    const { code } = this.#value(step);
    const pointer = local.get(this.#pointers.next, this.#types.i32);
    this.statements.push(v128.store(to, 1, pointer, invert ? v128.not(code) : code, '0'));
  }

  #storeOutputs({ step, invert, to }: VectorSink): void {
    const { module, program } = this.#emission;
    const { i16x8, i8x16, i32, v128 } = module;
    const count = Math.min(LANES, program.outputs.length - to);
    const { code } = this.#value(step);
    // Only the top bit of each byte counts, and bit 0 gets there in wider lanes too.
    const bits = i8x16.bitmask(i16x8.shl(invert ? v128.not(code) : code, i32.const(7)));
    const known = count === LANES ? bits : i32.and(bits, i32.const((1 << count) - 1));
    const row = this.#at(this.#pointers.response);
    this.statements.push(storeHalf(module, row, to, known, program.outputs.length));
  }

  #storeRow({ step, to, words }: RowSink, isWhole: boolean): void {
    const { v128 } = this.#emission.module;
    const row = () => this.#at(this.#pointers.response);
    if (isWhole) {
      this.statements.push(v128.store(to, 4, row(), this.#value(step).code, '0'));
      return;
    }
    for (const word of words) {
      const { code } = this.#value(step);
      this.statements.push(v128.store32_lane(to + 4 * word, 4, word, row(), code, '0'));
    }
  }

  #at(pointer: number): binaryen.ExpressionRef {
    return this.#emission.module.local.get(pointer, this.#types.i32);
  }

  #typeOf(step: number): binaryen.Type {
    return isNumber(this.#code.steps[step]!.op) ? this.#types.i64 : this.#types.v128;
  }

  #setLocal(step: number, code: binaryen.ExpressionRef): number {
    const number = this.#firstLocal + this.locals.push(this.#typeOf(step)) - 1;
    this.#locals.set(step, number);
    this.statements.push(this.#emission.module.local.set(number, code));
    return number;
  }

  #toLocal(step: number, code: binaryen.ExpressionRef): binaryen.ExpressionRef {
    const number = this.#setLocal(step, code);
    return this.#emission.module.local.get(number, this.#typeOf(step));
  }

  #store(offset: number, code: binaryen.ExpressionRef, isNumber: boolean): void {
    const { i64, v128 } = this.#emission.module;
    const { store } = isNumber ? i64 : v128;
    this.statements.push(store(offset, 4, this.#at(this.#pointers.next), code, '0'));
  }
}

/** A vector constant. */
export function constant(
  module: binaryen.Module,
  bytes: readonly number[],
): binaryen.ExpressionRef {
  return module.v128.const(bytes as number[]);
}
