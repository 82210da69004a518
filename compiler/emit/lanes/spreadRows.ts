import type binaryen from 'binaryen';
import { laneRowWords } from '../../../runtime/laneLayout.js';
import type { RowLayout } from '../../../runtime/layout.js';
import type { LaneModuleParts } from './writeBlock.js';

/** Locals of the exported `spread`, parameters first. */
const Spread = { From: 0, To: 1, Rows: 2, Bits: 3, Left: 4, Number: 5 } as const;

/**
 * Adds the exported `spread(from, to, rows)`: makes lane rows of packed stimulus rows that stand one
 * behind another at `from`, with the same inputs in all lanes.
 */
export function addSpread(parts: LaneModuleParts, row: RowLayout, threeValued: boolean): void {
  const { wasm, module } = parts;
  const { i32, local } = module;
  const get = (number: number) => local.get(number, wasm.i32);
  const group = [
    local.set(Spread.Bits, i32.const(row.bits)),
    module.loop('number', numberOfBits(parts)),
  ];
  const groups = threeValued ? [...group, ...copyOf(parts, row)] : group;
  const rows = module.loop(
    'row',
    module.block(null, [
      ...groups,
      local.set(Spread.Rows, i32.sub(get(Spread.Rows), i32.const(1))),
      module.br('row', get(Spread.Rows)),
    ]),
  );
  const body = laneRowWords(row, threeValued) === 0 ? module.nop() : rows;
  const code = module.if(get(Spread.Rows), body);
  const parameters = wasm.createType([wasm.i32, wasm.i32, wasm.i32]);
  const locals = [wasm.i32, wasm.i32, wasm.i32];
  module.addFunction('spread', parameters, wasm.none, locals, code);
  module.addFunctionExport('spread', 'spread');
}

// The group of bits that are x is laid out like that of the values.
const copyOf = (parts: LaneModuleParts, row: RowLayout): binaryen.ExpressionRef[] => {
  const { module } = parts;
  return [
    module.local.set(Spread.Bits, module.i32.const(row.bits)),
    module.loop('unknown', numberOfBits(parts, 'unknown')),
  ];
};

// Takes the next number and spreads its bits, 32 or as many as are left.
function numberOfBits(
  { wasm, module, word }: LaneModuleParts,
  label = 'number',
): binaryen.ExpressionRef {
  const { i32, local } = module;
  const get = (number: number) => local.get(number, wasm.i32);
  const advance = (number: number, by: number) =>
    local.set(number, i32.add(get(number), i32.const(by)));
  const bits = i32.sub(i32.const(0), i32.and(get(Spread.Number), i32.const(1)));
  const each = module.block(null, [
    word.store(0, get(Spread.To), word.spread(bits)),
    advance(Spread.To, word.bytes),
    local.set(Spread.Number, i32.shr_u(get(Spread.Number), i32.const(1))),
    advance(Spread.Left, -1),
    module.br(`${label}Bit`, get(Spread.Left)),
  ]);
  const isWhole = i32.lt_u(i32.const(32), get(Spread.Bits));
  return module.block(null, [
    local.set(Spread.Number, i32.load(0, 4, get(Spread.From), '0')),
    advance(Spread.From, 4),
    local.set(Spread.Left, module.select(isWhole, i32.const(32), get(Spread.Bits))),
    local.set(Spread.Bits, i32.sub(get(Spread.Bits), get(Spread.Left))),
    module.loop(`${label}Bit`, each),
    module.br(label, get(Spread.Bits)),
  ]);
}
