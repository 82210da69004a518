import type binaryen from 'binaryen';
import type { Emission, Pointers } from './blockEmitter.js';

/** Locals of the exported `run`, parameters first. */
export const RunLocal = {
  Cycles: 0,
  Row: 1,
  RowStep: 2,
  Response: 3,
  ResponseStep: 4,
  Current: 5,
  Next: 6,
  Left: 7,
  /** First number free for what the loop's body needs. */
  Free: 8,
} as const;

/** Where the cycle's code finds its addresses when it stands inside `run`. */
export const runPointers: Pointers = {
  current: RunLocal.Current,
  next: RunLocal.Next,
  row: RunLocal.Row,
};

/**
 * The body of the exported `run`: the cycle's code in a loop, the two areas changing roles after
 * each cycle, so that no state is copied. Ends early, with the number of cycles done, where a fault byte is
 * set.
 */
export function runLoop(
  emission: Emission,
  areaSum: number,
  cycle: readonly binaryen.ExpressionRef[],
): binaryen.ExpressionRef {
  const { module, i32: type } = emission;
  const { i32, local } = module;
  const get = (number: number) => local.get(number, type);
  const advance = (number: number, step: number) =>
    local.set(number, i32.add(get(number), get(step)));
  const finish = () => [
    module.global.set('current', get(RunLocal.Current)),
    module.return(i32.sub(get(RunLocal.Cycles), get(RunLocal.Left))),
  ];
  const other = () => i32.sub(i32.const(areaSum), get(RunLocal.Current));
  const body = module.block(null, [
    ...cycle,
    ...faultChecks(emission, () => module.block(null, finish())),
    local.set(RunLocal.Current, get(RunLocal.Next)),
    local.set(RunLocal.Next, other()),
    advance(RunLocal.Row, RunLocal.RowStep),
    advance(RunLocal.Response, RunLocal.ResponseStep),
    local.set(RunLocal.Left, i32.sub(get(RunLocal.Left), i32.const(1))),
    module.br('cycle', get(RunLocal.Left)),
  ]);
  return module.block(null, [
    local.set(RunLocal.Current, module.global.get('current', type)),
    local.set(RunLocal.Next, other()),
    local.set(RunLocal.Left, get(RunLocal.Cycles)),
    module.if(get(RunLocal.Left), module.loop('cycle', body)),
    ...finish(),
  ]);
}

function faultChecks(
  { module, program, area, i32: type }: Emission,
  leave: () => binaryen.ExpressionRef,
): binaryen.ExpressionRef[] {
  const { i32, local } = module;
  return program.faults.map((_, fault) => {
    const flag = i32.load8_u(area.faults + fault, 1, local.get(RunLocal.Next, type), '0');
    const found = module.block(null, [module.global.set('fault', i32.const(fault)), leave()]);
    return module.if(i32.and(flag, i32.const(1)), found);
  });
}
