import type binaryen from 'binaryen';
import type { BlockPlan, Step } from './planBlock.js';
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

/** Adds a function that carries out the steps of a block. */
export function writeBlock(parts: LaneModuleParts, name: string, plan: BlockPlan): void {
  const { wasm, module, word } = parts;
  const { i32, local } = module;
  const pointers = REGIONS + MOST_POINTERS;
  const windows = new Windows(plan.steps, word.bytes, REGIONS);
  const value = (number: number) => local.get(pointers + number, word.type);
  const body: binaryen.ExpressionRef[] = [];
  const address = (region: number): { offset: number; pointer: binaryen.ExpressionRef } => {
    const { address, move } = windows.access(region);
    if (move !== undefined) {
      const moved = i32.add(local.get(move.region, wasm.i32), i32.const(move.by));
      body.push(local.set(move.pointer, moved));
    }
    return { offset: address.offset, pointer: local.get(address.pointer, wasm.i32) };
  };
  const set = (step: Extract<Step, { to: number }>, code: binaryen.ExpressionRef): void => {
    body.push(local.set(pointers + step.to, code));
  };
  for (const step of plan.steps) {
    if (step.kind === 'store') {
      const { offset, pointer } = address(step.region);
      body.push(word.store(offset, pointer, value(step.from)));
    } else if (step.kind === 'load') {
      const { offset, pointer } = address(step.region);
      set(step, word.load(offset, pointer));
    } else if (step.kind === 'constant') {
      set(step, word.constant(step.bit));
    } else {
      set(
        step,
        operate(word, step.op, (which) => value(step.operands[which]!)),
      );
    }
  }
  const parameters = wasm.createType(new Array<binaryen.Type>(REGIONS).fill(wasm.i32));
  const locals = [
    ...new Array<binaryen.Type>(MOST_POINTERS).fill(wasm.i32),
    ...new Array<binaryen.Type>(plan.locals).fill(word.type),
  ];
  module.addFunction(name, parameters, wasm.none, locals, module.block(null, body));
}
