import type binaryen from 'binaryen';
import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import type { CyclePrograms } from '../program/program.js';
import { RunParameter } from './runLoop.js';

/** Input bits of the widest rows of a table; of each state it has an entry for each of their values. */
const MOST_INPUT_BITS = 12;

/** State bits, which are packed wherever an entry is made. */
const MOST_STATES = 1024;

/** Words of a response row. */
const MOST_RESPONSE_WORDS = 64;

/** Whether a table of next states and responses can be made for programs, see `TableRunner`. */
export function canHaveTable(
  { programs, pattern, memories }: CyclePrograms,
  { inputs, outputs, threeValued }: ModelLayout,
): boolean {
  return (
    programs.length === 1 &&
    pattern.length === 1 &&
    memories.length === 0 &&
    programs[0]!.stateCount <= MOST_STATES &&
    inputs.bits <= MOST_INPUT_BITS &&
    rowStride(outputs, threeValued) <= MOST_RESPONSE_WORDS
  );
}

const Local = {
  ...RunParameter,
  Place: 5,
  Left: 6,
  State: 7,
  Next: 8,
  Entry: 9,
} as const;

/**
 * Adds the exported function `runTable`, which takes and gives what `run` does but looks up each
 * cycle instead of computing it. Its last parameter is the address of the word that holds the
 * address of the present state's entries.
 *
 * A state has an entry of eight bytes for each value of the inputs: the address of the next state's
 * entries, 0 where it is not known, and the response row, or its address unless it is one word. The
 * loop ends before a cycle that is not known or whose inputs have an x. One load depends on another
 * from cycle to cycle; all else can be done beside it.
 */
export function addTableLoop(
  wasm: typeof binaryen,
  module: binaryen.Module,
  layout: ModelLayout,
): void {
  const { i32, i64, local } = module;
  const type = wasm.i32;
  const get = (number: number) => local.get(number, type);
  const advance = (number: number, step: number) =>
    local.set(number, i32.add(get(number), get(step)));
  const body = [
    ...knownInputs(module, layout, get),
    local.set(Local.Entry, i64.load(0, 8, entryAddress(module, layout, get), '0')),
    local.set(Local.Next, i32.wrap(local.get(Local.Entry, wasm.i64))),
    module.br('done', i32.eqz(get(Local.Next))),
    local.set(Local.State, get(Local.Next)),
    ...storeResponse(wasm, module, rowStride(layout.outputs, layout.threeValued), get),
    advance(Local.Row, Local.RowStep),
    advance(Local.Response, Local.ResponseStep),
    local.set(Local.Left, i32.sub(get(Local.Left), i32.const(1))),
    module.br('cycle', get(Local.Left)),
  ];
  const whole = module.block(null, [
    local.set(Local.State, i32.load(0, 4, get(Local.Place), '0')),
    local.set(Local.Left, get(Local.Cycles)),
    module.block('done', [
      module.br('done', i32.eqz(get(Local.Left))),
      module.loop('cycle', module.block(null, body)),
    ]),
    i32.store(0, 4, get(Local.Place), get(Local.State), '0'),
    module.return(i32.sub(get(Local.Cycles), get(Local.Left))),
  ]);
  const parameters = wasm.createType(new Array(Local.Left).fill(type));
  module.addFunction('runTable', parameters, type, [type, type, type, wasm.i64], whole);
  module.addFunctionExport('runTable', 'runTable');
}

type Get = (local: number) => binaryen.ExpressionRef;

const inputMask = ({ inputs }: ModelLayout): number => (1 << inputs.bits) - 1;

// Ends the loop where an input is x.
function knownInputs(module: binaryen.Module, layout: ModelLayout, get: Get) {
  if (!layout.threeValued || layout.inputs.bits === 0) return [];
  const { i32 } = module;
  const unknown = i32.load(4 * layout.inputs.words, 4, get(Local.Row), '0');
  return [module.br('done', i32.and(unknown, i32.const(inputMask(layout))))];
}

function entryAddress(module: binaryen.Module, layout: ModelLayout, get: Get) {
  const { i32 } = module;
  if (layout.inputs.bits === 0) return get(Local.State);
  const value = i32.and(i32.load(0, 4, get(Local.Row), '0'), i32.const(inputMask(layout)));
  return i32.add(get(Local.State), i32.shl(value, i32.const(3)));
}

function storeResponse(
  wasm: typeof binaryen,
  module: binaryen.Module,
  words: number,
  get: Get,
): binaryen.ExpressionRef[] {
  const { i32, i64, local } = module;
  const output = () => {
    const entry = local.get(Local.Entry, wasm.i64);
    return i32.wrap(i64.shr_u(entry, i64.const(32)));
  };
  if (words === 0) return [];
  if (words === 1) return [i32.store(0, 4, get(Local.Response), output(), '0')];
  return [
    local.set(Local.Next, output()),
    ...Array.from({ length: words }, (_, word) =>
      i32.store(4 * word, 4, get(Local.Response), i32.load(4 * word, 4, get(Local.Next), '0'), '0'),
    ),
  ];
}
