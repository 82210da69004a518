import type binaryen from 'binaryen';
import { type ModelLayout, rowStride } from '../../../runtime/layout.js';
import type { CyclePrograms, Program } from '../../program/program.js';
import { RunParameter } from '../runLoop.js';

const GROUP = 16;

/**
 * Most and fewest cycles between two looks whether all stands still, where a circuit never rests, and
 * the operations that are made between them else: a look costs about a hundredth of these.
 */
const MOST_PACE = 128;
const LEAST_PACE = 4;
const OPERATIONS_A_LOOK = 6000;

/** Name of the global that is 1 where a cycle has written to a memory, until it is set to 0. */
export const WROTE = 'wrote';

/** Whether cycles in which nothing changes can be told from the cycle before. */
export const canBeQuiet = ({ programs, pattern }: CyclePrograms): boolean =>
  programs.length === 1 && pattern.length === 1;

/** Bytes with a 1 for each state bit that counts, as they stand in an area. */
export function stateMask({ states, stateCount }: Program): Uint8Array {
  const mask = new Uint8Array(Math.ceil(stateCount / GROUP) * GROUP);
  for (const [bit, { role }] of states.entries()) mask[bit] = role === 'unused' ? 0 : 1;
  return mask;
}

function mostPace({ op, vectors }: Program): number {
  const operations = 1 + op.length + (vectors?.steps.length ?? 0);
  const pace = 2 ** Math.ceil(Math.log2(OPERATIONS_A_LOOK / operations));
  return Math.min(MOST_PACE, Math.max(LEAST_PACE, pace));
}

/** What the loop works with. */
export interface QuietPlace {
  readonly areas: readonly [number, number];
  /** Address of the mask of the state. */
  readonly maskAt: number;
  readonly program: Program;
  /** Whether cycles write to memories, and say so in `WROTE`. */
  readonly writes: boolean;
  readonly layout: ModelLayout;
}

/** Globals of the loop: cycles that it has passed over, and what it knows from call to call. */
const globals = { quiet: 0, pace: 1, moved: 0 } as const;

const Local = {
  ...RunParameter,
  Left: 5,
  Count: 6,
  Ran: 7,
  Pace: 8,
} as const;

/**
 * Adds the exported function `run`, which takes and gives what the function named `cycles` does, but
 * passes over cycles in which nothing changes, and the exported global `quiet`, which counts these.
 *
 * Where neither state nor inputs are other than in the cycle before, and that wrote to no memory, the
 * state stays and the response is that of before. Both areas hold the same state then. As long as
 * the inputs stay too, a cycle costs a comparison of rows; where one row is held and nobody looks,
 * all of them cost nothing.
 *
 * It looks after 1, 2, 4 cycles and so on, up to `mostPace`, so that a circuit which never rests
 * hardly notices.
 */
export function addQuietLoop(
  wasm: typeof binaryen,
  module: binaryen.Module,
  cycles: string,
  place: QuietPlace,
): void {
  const { i32, local, global } = module;
  const type = wasm.i32;
  for (const [name, value] of Object.entries(globals)) {
    module.addGlobal(name, type, true, i32.const(value));
  }
  module.addGlobalExport('quiet', 'quiet');
  addIsStill(wasm, module, place);
  const get = (number: number) => local.get(number, type);
  const parameters = [Local.Row, Local.RowStep, Local.Response, Local.ResponseStep];
  const lesser = (number: number, other: binaryen.ExpressionRef) =>
    module.select(i32.lt_u(get(number), other), get(number), module.copyExpression(other));
  const eighth = i32.or(i32.shr_u(get(Local.Cycles), i32.const(3)), i32.const(1));
  const body = module.block(null, [
    local.set(Local.Count, lesser(Local.Pace, get(Local.Left))),
    ...(place.writes ? [global.set(WROTE, i32.const(0))] : []),
    local.set(Local.Ran, module.call(cycles, [get(Local.Count), ...parameters.map(get)], type)),
    local.set(Local.Left, i32.sub(get(Local.Left), get(Local.Ran))),
    module.br('done', i32.or(i32.eqz(get(Local.Left)), i32.ne(get(Local.Ran), get(Local.Count)))),
    advance(module, get, get(Local.Ran)),
    local.set(Local.Pace, lesser(Local.Pace, i32.const(mostPace(place.program) / 2))),
    local.set(Local.Pace, i32.shl(get(Local.Pace), i32.const(1))),
    module.if(
      isQuiet(wasm, module, place, get),
      module.block(null, quietCycles(wasm, module, place, get)),
    ),
    module.br('cycles', get(Local.Left)),
  ]);
  const whole = module.block(null, [
    local.set(Local.Left, get(Local.Cycles)),
    local.set(Local.Pace, global.get('pace', type)),
    // Short calls must look too.
    local.set(Local.Pace, lesser(Local.Pace, eighth)),
    module.block('done', [module.loop('cycles', body)]),
    global.set('pace', get(Local.Pace)),
    module.return(i32.sub(get(Local.Cycles), get(Local.Left))),
  ]);
  const taken = wasm.createType(new Array(Local.Left).fill(type));
  module.addFunction('run', taken, type, [type, type, type, type], whole);
  module.addFunctionExport('run', 'run');
}

type Get = (local: number) => binaryen.ExpressionRef;

function advance(module: binaryen.Module, get: Get, count: binaryen.ExpressionRef) {
  const { i32, local } = module;
  const by = (to: number, step: number, times: binaryen.ExpressionRef) =>
    local.set(to, i32.add(get(to), i32.mul(get(step), times)));
  return module.block(null, [
    by(Local.Row, Local.RowStep, count),
    by(Local.Response, Local.ResponseStep, module.copyExpression(count)),
  ]);
}

// The row before is there, since a cycle of this call read it.
function isQuiet(wasm: typeof binaryen, module: binaryen.Module, place: QuietPlace, get: Get) {
  const { i32, global } = module;
  const never = i32.const(0);
  const isStill = module.call('isStill', [], wasm.i32);
  const hasSettled = place.writes
    ? module.if(global.get(WROTE, wasm.i32), i32.const(0), isStill)
    : isStill;
  return module.if(rowDiffers(module, place, get), never, hasSettled);
}

// Nothing or a v128 or a word at a time.
function* pieces(words: number): Iterable<{ readonly at: number; readonly isWide: boolean }> {
  for (let word = 0; word < words; ) {
    const isWide = words - word >= 4;
    yield { at: 4 * word, isWide };
    word += isWide ? 4 : 1;
  }
}

function rowDiffers(module: binaryen.Module, { layout }: QuietPlace, get: Get) {
  const { i32, v128 } = module;
  const before = () => i32.sub(get(Local.Row), get(Local.RowStep));
  let differs: binaryen.ExpressionRef | undefined;
  for (const { at, isWide } of pieces(rowStride(layout.inputs, layout.threeValued))) {
    const piece = isWide
      ? v128.any_true(
          v128.xor(v128.load(at, 4, get(Local.Row), '0'), v128.load(at, 4, before(), '0')),
        )
      : i32.ne(i32.load(at, 4, get(Local.Row), '0'), i32.load(at, 4, before(), '0'));
    differs = differs === undefined ? piece : i32.or(differs, piece);
  }
  return differs ?? i32.const(0);
}

function quietCycles(
  wasm: typeof binaryen,
  module: binaryen.Module,
  place: QuietPlace,
  get: Get,
): binaryen.ExpressionRef[] {
  const { i32, v128, local, global } = module;
  const { outputs, threeValued } = place.layout;
  const before = () => i32.sub(get(Local.Response), get(Local.ResponseStep));
  const copies = [...pieces(rowStride(outputs, threeValued))].map(({ at, isWide }) =>
    isWide
      ? v128.store(at, 4, get(Local.Response), v128.load(at, 4, before(), '0'), '0')
      : i32.store(at, 4, get(Local.Response), i32.load(at, 4, before(), '0'), '0'),
  );
  const each = module.loop(
    'quiet',
    module.block(null, [
      ...copies,
      advance(module, get, i32.const(1)),
      local.set(Local.Left, i32.sub(get(Local.Left), i32.const(1))),
      module.br('left', i32.eqz(get(Local.Left))),
      module.br('quiet', i32.eqz(rowDiffers(module, place, get))),
    ]),
  );
  const isUnseen = i32.eqz(i32.or(get(Local.RowStep), get(Local.ResponseStep)));
  const count = () => get(Local.Count);
  const swapped = i32.sub(
    i32.const(place.areas[0] + place.areas[1]),
    global.get('current', wasm.i32),
  );
  return [
    local.set(Local.Count, get(Local.Left)),
    module.if(isUnseen, local.set(Local.Left, i32.const(0)), module.block('left', [each])),
    local.set(Local.Count, i32.sub(count(), get(Local.Left))),
    global.set('quiet', i32.add(global.get('quiet', wasm.i32), count())),
    // As if they had been run: who counts cycles knows which area is the current one.
    module.if(i32.and(count(), i32.const(1)), global.set('current', swapped)),
    local.set(Local.Pace, i32.const(1)),
  ];
}

// Whether both areas hold the same state. Where it differed last is looked at first.
function addIsStill(wasm: typeof binaryen, module: binaryen.Module, place: QuietPlace): void {
  const { i32, local, global, v128 } = module;
  const bytes = Math.ceil(place.program.stateCount / GROUP) * GROUP;
  const at = 0;
  const differs = (offset: () => binaryen.ExpressionRef) => {
    const [first, second] = place.areas.map((area) => v128.load(area, 1, offset(), '0'));
    const mask = v128.load(place.maskAt, 1, offset(), '0');
    return v128.any_true(v128.and(v128.xor(first!, second!), mask));
  };
  const get = () => local.get(at, wasm.i32);
  const group = module.block(null, [
    module.if(
      differs(get),
      module.block(null, [global.set('moved', get()), module.return(i32.const(0))]),
    ),
    local.set(at, i32.add(get(), i32.const(GROUP))),
    module.br('group', i32.lt_u(get(), i32.const(bytes))),
  ]);
  const body =
    bytes === 0
      ? i32.const(1)
      : module.block(null, [
          module.if(
            differs(() => global.get('moved', wasm.i32)),
            module.return(i32.const(0)),
          ),
          module.loop('group', group),
          module.return(i32.const(1)),
        ]);
  module.addFunction('isStill', wasm.none, wasm.i32, [wasm.i32], body);
}
