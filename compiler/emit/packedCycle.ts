import type binaryen from 'binaryen';
import { BlockEmitter, type Emission } from './blockEmitter.js';
import { LEAVE } from './fence.js';
import { RunLocal } from './runLoop.js';
import type { Copy } from './sinks.js';
import { VectorEmitter } from './vectorEmitter.js';
import { type StepHomes, type VectorPart, vectorParts } from './vectorParts.js';

/** Copies in one function. */
const COPIES_IN_BLOCK = 1000;

/** Parameters of each generated function. */
const PARAMETERS = { current: 0, next: 1, row: 2, response: 3 };
const PARAMETER_COUNT = 4;

/** Statements that call the functions of one cycle of a program with vectors, which it adds. */
export function packedCycle(
  wasm: typeof binaryen,
  emission: Emission,
  cycle: string,
  homes: StepHomes,
): binaryen.ExpressionRef[] {
  return new PackedCycle(wasm, emission, cycle, homes).calls();
}

class PackedCycle {
  readonly #wasm: typeof binaryen;
  readonly #emission: Emission;
  readonly #cycle: string;
  readonly #homes: StepHomes;
  readonly #calls: binaryen.ExpressionRef[] = [];

  constructor(wasm: typeof binaryen, emission: Emission, cycle: string, homes: StepHomes) {
    this.#wasm = wasm;
    this.#emission = emission;
    this.#cycle = cycle;
    this.#homes = homes;
  }

  calls(): binaryen.ExpressionRef[] {
    const { program, sinks } = this.#emission;
    const vectors = program.vectors!;
    const parts = vectorParts(vectors);
    const lastPart = parts.findLastIndex((ofStage) => ofStage.length > 0);
    this.#addCopies(sinks.copies, 'copies');
    let block = 0;
    for (const [stage, { blockEnd }] of vectors.stages.entries()) {
      for (; block < Math.min(blockEnd, program.blockStart.length - 1); block++)
        this.#addBlock(block);
      for (const part of parts[stage]!) {
        this.#addPart(part, stage === lastPart && part === parts[stage]!.at(-1));
      }
    }
    this.#addCopies(sinks.laneCopies, 'lanes');
    return this.#calls;
  }

  #addBlock(number: number): void {
    const emitter = new BlockEmitter(this.#emission, number, PARAMETERS, PARAMETER_COUNT);
    emitter.emit();
    this.#add(`block${number}`, emitter.statements, this.#scalars(emitter));
  }

  #addPart(part: VectorPart, isLast: boolean): void {
    const { states, outputs, rows } = this.#emission.program.vectors!;
    const { i32, i64, v128 } = this.#wasm;
    const types = { i32, i64, v128 };
    const emitter = new VectorEmitter(
      this.#emission,
      types,
      PARAMETERS,
      this.#homes,
      PARAMETER_COUNT,
    );
    emitter.emit(part, isLast ? { states, outputs, rows } : { states: [], outputs: [], rows: [] });
    this.#add(`vectors${part.start}`, emitter.statements, emitter.locals);
  }

  #addCopies(copies: readonly Copy[], name: string): void {
    const beyond = this.#emission.program.blockStart.length - 1;
    for (let from = 0; from < copies.length; from += COPIES_IN_BLOCK) {
      // Beyond the last operation, a block has none of its own and only copies.
      const emitter = new BlockEmitter(this.#emission, beyond, PARAMETERS, PARAMETER_COUNT);
      for (const [value, offset] of copies.slice(from, from + COPIES_IN_BLOCK)) {
        emitter.copy(value, offset);
      }
      this.#add(`${name}${from}`, emitter.statements, this.#scalars(emitter));
    }
  }

  #scalars({ localCount }: BlockEmitter): binaryen.Type[] {
    return new Array<binaryen.Type>(localCount - PARAMETER_COUNT).fill(this.#wasm.i32);
  }

  #add(name: string, body: binaryen.ExpressionRef[], locals: binaryen.Type[]): void {
    if (body.length === 0) return;
    const { i32, none, createType } = this.#wasm;
    const { module } = this.#emission;
    const whole = `${this.#cycle}_${name}`;
    module.addFunction(
      whole,
      createType([i32, i32, i32, i32]),
      none,
      locals,
      module.block(LEAVE, body),
    );
    const { Current, Next, Row, Response } = RunLocal;
    const pointers = [Current, Next, Row, Response].map((local) => module.local.get(local, i32));
    this.#calls.push(module.call(whole, pointers, none));
  }
}
