import type binaryen from 'binaryen';
import type { BlockPlan } from './planBlock.js';
import { blockCode, type LaneModuleParts } from './writeBlock.js';

/** Locals of the exported `run`, parameters first. */
const Run = {
  Cycles: 0,
  Row: 1,
  RowStep: 2,
  Response: 3,
  ResponseStep: 4,
  Current: 5,
  Next: 6,
  Position: 7,
  Left: 8,
  Swap: 9,
  Scratch: 10,
  /** First number free for code that stands in the loop. */
  Free: 11,
} as const;

const PARAMETERS = Run.Left;

/** Where code that stands in the loop finds the address of each `Region`. */
const REGION_LOCALS = [Run.Current, Run.Next, Run.Row, Run.Response, Run.Scratch];

/** The code of one kind of cycle. */
export interface LaneCycle {
  /** Names of its functions, in order; or plans of code that stands in the loop and costs no call. */
  readonly blocks: readonly string[] | readonly BlockPlan[];
  /** Addresses of the words of lanes that have no result. */
  readonly faults: readonly number[];
}

/** Addresses that `run` works with. */
export interface LoopPlace {
  readonly scratch: number;
  /** The word of lanes whose faults count. */
  readonly running: number;
  /** Where the number of each cycle's code stands, a byte each, and how many there are. */
  readonly patternAt: number;
  readonly patternLength: number;
}

/**
 * Adds the exported `run`: the cycles in a loop, the two state areas changing roles after each, so
 * that no state is copied. Returns the number of cycles done: fewer than asked for if a running
 * lane has no result of the last of them.
 */
export function addLaneLoop(
  parts: LaneModuleParts,
  place: LoopPlace,
  cycles: readonly LaneCycle[],
): void {
  const { wasm, module } = parts;
  const { i32, local } = module;
  const get = (number: number) => local.get(number, wasm.i32);
  const advance = (number: number, by: binaryen.ExpressionRef) =>
    local.set(number, i32.add(get(number), by));
  const done = () => module.return(i32.sub(get(Run.Cycles), get(Run.Left)));
  const own: binaryen.Type[] = new Array<binaryen.Type>(Run.Free - PARAMETERS).fill(wasm.i32);
  const coded = cycles.map((cycle) => [
    ...cycle.blocks.flatMap((block) => blockStatements(parts, block, own)),
    // Done is done: a lane without result costs the others nothing.
    local.set(Run.Swap, get(Run.Current)),
    local.set(Run.Current, get(Run.Next)),
    local.set(Run.Next, get(Run.Swap)),
    advance(Run.Left, i32.const(-1)),
    ...(cycle.faults.length === 0 ? [] : [module.if(faulty(parts, place, cycle), done())]),
  ]);
  const body = module.block(null, [
    ...(coded.length === 1 ? coded[0]! : [chosen(parts, place, coded)]),
    advance(Run.Row, get(Run.RowStep)),
    advance(Run.Response, get(Run.ResponseStep)),
    module.br('cycle', get(Run.Left)),
  ]);
  const code = module.block(null, [
    local.set(Run.Left, get(Run.Cycles)),
    local.set(Run.Scratch, i32.const(place.scratch)),
    module.if(get(Run.Left), module.loop('cycle', body)),
    done(),
  ]);
  const parameters = wasm.createType(new Array<binaryen.Type>(PARAMETERS).fill(wasm.i32));
  module.addFunction('run', parameters, wasm.i32, own, code);
  module.addFunctionExport('run', 'run');
}

// A call, or the code itself, whose locals are added to `own`.
function blockStatements(
  parts: LaneModuleParts,
  block: string | BlockPlan,
  own: binaryen.Type[],
): binaryen.ExpressionRef[] {
  const { wasm, module } = parts;
  if (typeof block === 'string') {
    const pointers = REGION_LOCALS.map((number) => module.local.get(number, wasm.i32));
    return [module.call(block, pointers, wasm.none)];
  }
  const place = { regions: REGION_LOCALS, free: PARAMETERS + own.length };
  const { body, locals } = blockCode(parts, block, place);
  own.push(...locals);
  return body;
}

function faulty(
  { module, word }: LaneModuleParts,
  { running }: LoopPlace,
  { faults }: LaneCycle,
): binaryen.ExpressionRef {
  const load = (address: number) => word.load(0, module.i32.const(address));
  const all = faults.slice(1).reduce((sum, at) => word.or(sum, load(at)), load(faults[0]!));
  return word.any(word.and(all, load(running)));
}

// The pattern tells which cycle is next.
function chosen(
  { wasm, module }: LaneModuleParts,
  { patternAt, patternLength }: LoopPlace,
  cycles: readonly (readonly binaryen.ExpressionRef[])[],
): binaryen.ExpressionRef {
  const { i32, local } = module;
  const position = () => local.get(Run.Position, wasm.i32);
  const following = i32.add(position(), i32.const(1));
  const isLast = i32.eq(position(), i32.const(patternLength - 1));
  const shape = () => local.get(Run.Swap, wasm.i32);
  const branches = cycles.map((cycle, index) =>
    module.if(i32.eq(shape(), i32.const(index)), module.block(null, [...cycle, module.br('next')])),
  );
  return module.block('next', [
    local.set(Run.Swap, i32.load8_u(patternAt, 1, position(), '0')),
    local.set(Run.Position, module.select(isLast, i32.const(0), following)),
    ...branches,
  ]);
}
