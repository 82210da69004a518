import type binaryen from 'binaryen';
import type { CyclePrograms, Program } from '../program/program.js';
import { BlockEmitter, type Emission } from './blockEmitter.js';
import { LEAVE, STRETCH } from './fence.js';
import { packFromValues, SCALAR_OUTPUTS } from './packOutputs.js';
import { type CallAhead, RunLocal, runPointers } from './runLoop.js';
import { storesOf } from './sinks.js';

/** Most state bits that are held: with 37 of them in locals a circuit ran slower, with 21 faster. */
const MOST_STATES = 24;

/** Most operations: beyond, values would crowd the state out of the registers. */
const MOST_OPERATIONS = 8 * STRETCH;

/** Name of the function. */
const AHEAD = 'ahead';

/** Whether a circuit is small enough to keep its state in locals while cycles run. */
export function canHold({ programs, pattern }: CyclePrograms): boolean {
  const { op, stateCount, outputs, updates, faults, writes, vectors } = programs[0]!;
  return (
    programs.length === 1 &&
    pattern.length === 1 &&
    stateCount > 0 &&
    stateCount <= MOST_STATES &&
    op.length <= MOST_OPERATIONS &&
    programs[0]!.blockStart.length === 2 &&
    outputs.length <= SCALAR_OUTPUTS &&
    updates.length + faults.length + writes.length === 0 &&
    vectors === undefined
  );
}

/**
 * Adds a function that runs one cycle or more with the state in locals, so that a state bit is at
 * hand as soon as it is computed: by way of memory it takes longer than the operations of a small
 * circuit. At the end the state stands in the area where `run` would leave it; of the cycle before
 * nothing does.
 */
export function addHeldLoop(
  wasm: typeof binaryen,
  module: binaryen.Module,
  program: Program,
  place: Pick<Emission, 'area' | 'memories' | 'pool' | 'fences'> & { readonly areaSum: number },
): CallAhead {
  const { i32, local, global } = module;
  const type = wasm.i32;
  const { stateCount, outputs } = program;
  const { Cycles, Row, RowStep, Response, ResponseStep, Current, Next, Left, Free } = RunLocal;
  const get = (number: number) => local.get(number, type);
  const held = { now: Free, next: Free + stateCount };
  const sinks = storesOf(program, place.area, []);
  const emission: Emission = { ...place, module, i32: type, program, sinks, held };
  const block = new BlockEmitter(emission, 0, runPointers, held.next + stateCount);
  block.emit(outputs);
  for (const [value, offset] of sinks.copies) block.copy(value, offset);
  const packed = packFromValues(emission, block, Response);
  const bits = Array.from({ length: stateCount }, (_, bit) => bit);
  const advance = (number: number, step: number) =>
    local.set(number, i32.add(get(number), get(step)));
  const body = module.block(null, [
    ...block.statements,
    ...packed,
    ...bits.map((bit) => local.set(held.now + bit, get(held.next + bit))),
    advance(Row, RowStep),
    advance(Response, ResponseStep),
    local.set(Left, i32.sub(get(Left), i32.const(1))),
    module.br('cycle', get(Left)),
  ]);
  const swap = local.set(Current, get(Next));
  const whole = module.block(null, [
    local.set(Current, global.get('current', type)),
    local.set(Next, i32.sub(i32.const(place.areaSum), get(Current))),
    local.set(Left, get(Cycles)),
    ...bits.map((bit) => local.set(held.now + bit, i32.load8_u(bit, 1, get(Current), '0'))),
    // Fences leave past the stores, which would keep the state alive beyond its last use.
    module.block(LEAVE, [
      module.loop('cycle', body),
      module.if(i32.and(get(Cycles), i32.const(1)), swap),
      ...bits.map((bit) => i32.store8(bit, 1, get(Current), get(held.now + bit), '0')),
      global.set('current', get(Current)),
    ]),
  ]);
  const parameters = wasm.createType(new Array(Current).fill(type));
  const locals = new Array<binaryen.Type>(block.localCount - Current).fill(type);
  module.addFunction(AHEAD, parameters, wasm.none, locals, whole);
  return (given) => module.call(AHEAD, given, wasm.none);
}
