import type binaryen from 'binaryen';
import type { Pointers } from './blockEmitter.js';
import { LEAVE } from './fence.js';

/** Parameters of the exported `run`, and of what stands in its place. */
export const RunParameter = {
  Cycles: 0,
  Row: 1,
  RowStep: 2,
  Response: 3,
  ResponseStep: 4,
} as const;

/** Locals of `run`, parameters first. */
export const RunLocal = {
  ...RunParameter,
  Current: 5,
  Next: 6,
  Left: 7,
  /** Which cycle's code is run, where there are several. */
  Shape: 8,
  /** First number free for what the loop's body needs. */
  Free: 9,
} as const;

/** Where the cycle's code finds its addresses when it stands inside `run`. */
export const runPointers: Pointers = {
  current: RunLocal.Current,
  next: RunLocal.Next,
  row: RunLocal.Row,
};

/** The code of one cycle. */
export interface CycleCode {
  readonly statements: binaryen.ExpressionRef[];
  /** Locals in use, those of `run` included. */
  readonly localCount: number;
  /** Offsets in the next area of the bytes that must be 0. */
  readonly faults: readonly number[];
}

/** Makes a call that runs cycles, with parameters as `run` takes them. */
export type CallAhead = (parameters: binaryen.ExpressionRef[]) => binaryen.ExpressionRef;

/** Addresses that `run` works with. */
export interface RunPlace {
  /** Sum of the addresses of the two areas. */
  readonly areaSum: number;
  /** Where the number of each cycle's code stands, a byte each, and how many there are. */
  readonly patternAt: number;
  readonly patternLength: number;
  /** Runs all cycles but the last, if there is a faster way; see `addHeldLoop`. */
  readonly ahead?: CallAhead;
  /** Makes what stands behind each cycle, of code that ends the run; see `compareState`. */
  readonly afterCycle?: (leave: () => binaryen.ExpressionRef) => readonly binaryen.ExpressionRef[];
}

/**
 * The body of the exported `run`: the cycles' code in a loop, the two areas changing roles after
 * each cycle, so that no state is copied. Ends early, with the number of cycles done, where a fault
 * byte is set.
 */
export function runLoop(
  module: binaryen.Module,
  type: binaryen.Type,
  place: RunPlace,
  cycles: readonly CycleCode[],
): binaryen.ExpressionRef {
  const { i32, local, global } = module;
  const get = (number: number) => local.get(number, type);
  const advance = (number: number, step: number) =>
    local.set(number, i32.add(get(number), get(step)));
  const finish = () => [
    global.set('current', get(RunLocal.Current)),
    module.return(i32.sub(get(RunLocal.Cycles), get(RunLocal.Left))),
  ];
  const other = () => i32.sub(i32.const(place.areaSum), get(RunLocal.Current));
  const coded = withFaults(module, type, cycles, () => module.block(null, finish()));
  const body = module.block(null, [
    ...(coded.length === 1 ? coded[0]! : chosenCycle(module, type, place, coded)),
    local.set(RunLocal.Current, get(RunLocal.Next)),
    local.set(RunLocal.Next, other()),
    advance(RunLocal.Row, RunLocal.RowStep),
    advance(RunLocal.Response, RunLocal.ResponseStep),
    local.set(RunLocal.Left, i32.sub(get(RunLocal.Left), i32.const(1))),
    ...(place.afterCycle?.(() => module.block(null, finish())) ?? []),
    module.br('cycle', get(RunLocal.Left)),
  ]);
  return module.block(null, [
    local.set(RunLocal.Left, get(RunLocal.Cycles)),
    ...(place.ahead === undefined ? [] : [runAhead(module, type, place.ahead)]),
    local.set(RunLocal.Current, global.get('current', type)),
    local.set(RunLocal.Next, other()),
    module.block(LEAVE, [module.if(get(RunLocal.Left), module.loop('cycle', body))]),
    ...finish(),
  ]);
}

// All cycles but the last, which leaves in both areas what stands there after a cycle.
function runAhead(
  { i32, local, if: branch, block }: binaryen.Module,
  type: binaryen.Type,
  ahead: CallAhead,
): binaryen.ExpressionRef {
  const { Cycles, Row, RowStep, Response, ResponseStep, Left } = RunLocal;
  const get = (number: number) => local.get(number, type);
  const count = () => i32.sub(get(Cycles), i32.const(1));
  const advance = (number: number, step: number) =>
    local.set(number, i32.add(get(number), i32.mul(get(step), count())));
  const run = block(null, [
    ahead([count(), ...[Row, RowStep, Response, ResponseStep].map(get)]),
    advance(Row, RowStep),
    advance(Response, ResponseStep),
    local.set(Left, i32.const(1)),
  ]);
  return branch(i32.gt_u(get(Cycles), i32.const(1)), run);
}

// Each cycle's code with a check behind it; faults are numbered through all cycles.
function withFaults(
  module: binaryen.Module,
  type: binaryen.Type,
  cycles: readonly CycleCode[],
  leave: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef[][] {
  const { i32, local, global } = module;
  let number = 0;
  return cycles.map(({ statements, faults }) => [
    ...statements,
    ...faults.map((offset) => {
      const flag = i32.load8_u(offset, 1, local.get(RunLocal.Next, type), '0');
      const found = module.block(null, [global.set('fault', i32.const(number++)), leave()]);
      return module.if(i32.and(flag, i32.const(1)), found);
    }),
  ]);
}

// The pattern tells which cycle is next. Its place is kept between calls in a global.
function chosenCycle(
  module: binaryen.Module,
  type: binaryen.Type,
  { patternAt, patternLength }: RunPlace,
  cycles: readonly binaryen.ExpressionRef[][],
): binaryen.ExpressionRef[] {
  const { i32, local, global } = module;
  const position = () => global.get('position', type);
  const following = i32.add(position(), i32.const(1));
  const isLast = i32.eq(position(), i32.const(patternLength - 1));
  const branches = cycles.map((cycle, index) =>
    module.if(i32.eq(local.get(RunLocal.Shape, type), i32.const(index)), module.block(null, cycle)),
  );
  return [
    local.set(RunLocal.Shape, i32.load8_u(patternAt, 1, position(), '0')),
    ...branches,
    global.set('position', module.select(isLast, i32.const(0), following)),
  ];
}
