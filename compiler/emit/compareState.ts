import type binaryen from 'binaryen';
import { RunLocal } from './runLoop.js';

const GROUP = 16;

/** Globals of a module that compares its state, by name and first value. */
export const compareGlobals = {
  /** Cycles to the next comparison; 0 or less for none. */
  untilCompare: 0,
  /** Cycles from one comparison to the next. */
  comparePace: 0,
  /** Address of the state that is looked for, and of a mask with a 1 for each bit that counts. */
  marked: 0,
  markMask: 0,
  /** Offset of sixteen bytes in which the states differed last: they are looked at first. */
  differing: 0,
  /** Set to 1 when the state is the one looked for. */
  matched: 0,
} as const;

/** What comparing adds to a module's run loop. */
export interface StateComparison {
  /** Statements behind each cycle, when `RunLocal.Current` holds the state after it. */
  readonly afterCycle: readonly binaryen.ExpressionRef[];
}

/**
 * Makes the run loop of a module leave early, with `matched` set, after a cycle that ends in the
 * state at `marked`. Sixteen state bytes that differ decide; most often those that did so last.
 *
 * Adds the function `isMarked` and the exported globals of `compareGlobals`. `leave` makes code that
 * ends the run.
 */
export function compareState(
  wasm: typeof binaryen,
  module: binaryen.Module,
  stateCount: number,
  leave: () => binaryen.ExpressionRef,
): StateComparison {
  for (const [name, value] of Object.entries(compareGlobals)) {
    module.addGlobal(name, wasm.i32, true, module.i32.const(value));
    module.addGlobalExport(name, name);
  }
  addIsMarked(wasm, module, Math.ceil(stateCount / GROUP) * GROUP);
  const { i32, global, local } = module;
  const get = (name: keyof typeof compareGlobals) => global.get(name, wasm.i32);
  const current = () => local.get(RunLocal.Current, wasm.i32);
  const isMarked = module.if(
    differs(wasm, module, current(), get('differing')),
    i32.const(0),
    module.call('isMarked', [current()], wasm.i32),
  );
  const found = module.block(null, [global.set('matched', i32.const(1)), leave()]);
  const compare = module.block(null, [
    global.set('untilCompare', get('comparePace')),
    module.if(isMarked, found),
  ]);
  return {
    afterCycle: [
      global.set('untilCompare', i32.sub(get('untilCompare'), i32.const(1))),
      module.if(i32.eqz(get('untilCompare')), compare),
    ],
  };
}

// Goes through all groups, and remembers one that differs.
function addIsMarked(wasm: typeof binaryen, module: binaryen.Module, bytes: number): void {
  const { i32, local, global } = module;
  const [area, offset] = [0, 1];
  const get = (number: number) => local.get(number, wasm.i32);
  const advanced = i32.add(get(offset), i32.const(GROUP));
  const body = module.block(null, [
    module.if(
      differs(wasm, module, get(area), get(offset)),
      module.block(null, [global.set('differing', get(offset)), module.return(i32.const(0))]),
    ),
    local.set(offset, advanced),
    module.br('group', i32.lt_u(get(offset), i32.const(bytes))),
  ]);
  const whole = module.block(null, [module.loop('group', body), module.return(i32.const(1))]);
  module.addFunction('isMarked', wasm.createType([wasm.i32]), wasm.i32, [wasm.i32], whole);
}

/** Whether sixteen bytes of an area differ from those that are looked for. */
function differs(
  wasm: typeof binaryen,
  module: binaryen.Module,
  area: binaryen.ExpressionRef,
  offset: binaryen.ExpressionRef,
): binaryen.ExpressionRef {
  const { i32, v128, global } = module;
  const copy = () => module.copyExpression(offset);
  const at = (base: binaryen.ExpressionRef, place: binaryen.ExpressionRef) =>
    v128.load(0, 1, i32.add(base, place), '0');
  const state = at(area, offset);
  const marked = at(global.get('marked', wasm.i32), copy());
  const mask = at(global.get('markMask', wasm.i32), copy());
  return v128.any_true(v128.and(v128.xor(state, marked), mask));
}
