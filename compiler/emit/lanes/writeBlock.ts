import type binaryen from 'binaryen';
import type { BlockPlan } from './planBlock.js';
import { MOST_POINTERS, Windows } from './windows.js';
import { operate, type Word } from './word.js';

/** A module under construction, and what its functions work on. */
export interface LaneModuleParts {
  readonly wasm: typeof binaryen;
  readonly module: binaryen.Module;
  readonly word: Word;
}

/** Parameters of a block's function: a pointer for each `Region`. */
export const REGIONS = 5;

/** Locals of the function that a block stands in. */
export interface BlockLocals {
  /** Those that hold the address of each `Region`. */
  readonly regions: readonly number[];
  /** First one that is free; not below `REGIONS`. */
  readonly free: number;
}

/** The code of a block, and the types of its own locals. */
export interface BlockCode {
  readonly body: binaryen.ExpressionRef[];
  readonly locals: readonly binaryen.Type[];
}

/** Writes code that carries out the steps of a block. */
export function blockCode(
  { wasm, module, word }: LaneModuleParts,
  plan: BlockPlan,
  { regions, free }: BlockLocals,
): BlockCode {
  const { i32, local } = module;
  const firstValue = free + MOST_POINTERS;
  const windows = new Windows(plan.steps, word.bytes, free);
  const value = (number: number) => local.get(firstValue + number, word.type);
  const body: binaryen.ExpressionRef[] = [];
  const address = (region: number): { offset: number; pointer: binaryen.ExpressionRef } => {
    const { address, move } = windows.access(region);
    if (move !== undefined) {
      const moved = i32.add(local.get(regions[move.region]!, wasm.i32), i32.const(move.by));
      body.push(local.set(move.pointer, moved));
    }
    const pointer = regions[address.pointer] ?? address.pointer;
    return { offset: address.offset, pointer: local.get(pointer, wasm.i32) };
  };
  for (const step of plan.steps) {
    if (step.kind === 'store') {
      const { offset, pointer } = address(step.region);
      body.push(word.store(offset, pointer, value(step.from)));
      continue;
    }
    let made: binaryen.ExpressionRef;
    if (step.kind === 'load') {
      const { offset, pointer } = address(step.region);
      made = word.load(offset, pointer);
    } else if (step.kind === 'constant') made = word.constant(step.bit);
    else made = operate(word, step.op, (which) => value(step.operands[which]!));
    body.push(local.set(firstValue + step.to, made));
  }
  const locals = [
    ...new Array<binaryen.Type>(MOST_POINTERS).fill(wasm.i32),
    ...new Array<binaryen.Type>(plan.locals).fill(word.type),
  ];
  return { body, locals };
}

/** Adds a function that carries out the steps of a block. */
export function writeBlock(parts: LaneModuleParts, name: string, plan: BlockPlan): void {
  const { wasm, module } = parts;
  const regions = Array.from({ length: REGIONS }, (_, region) => region);
  const { body, locals } = blockCode(parts, plan, { regions, free: REGIONS });
  const parameters = wasm.createType(regions.map(() => wasm.i32));
  module.addFunction(name, parameters, wasm.none, [...locals], module.block(null, body));
}
