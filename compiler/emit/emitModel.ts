import type binaryen from 'binaryen';
import type { ModelLayout } from '../../runtime/layout.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import {
  layMemories,
  type MemoryPlaces,
  memoryImage,
  segmentsOf,
} from '../program/memoryPlaces.js';
import type { CyclePrograms, Program } from '../program/program.js';
import type { PassSwitches } from '../program/switches.js';
import { type AreaLayout, FIRST_AREA, layArea } from './areaLayout.js';
import { BlockEmitter, type Emission, type Pointers } from './blockEmitter.js';
import { compareState } from './compareState.js';
import { ConstantPool } from './constantPool.js';
import { LEAVE, STRETCH } from './fence.js';
import { addQuietLoop, canBeQuiet, stateMask, WROTE } from './guards/quietLoop.js';
import { addHeldLoop, canHold } from './heldLoop.js';
import { emitWrites } from './memory/writeCode.js';
import { packedCycle } from './packedCycle.js';
import {
  outputGroups,
  outputsInMemory,
  packFromMemory,
  packFromValues,
  SCALAR_OUTPUTS,
} from './packOutputs.js';
import { type CycleCode, RunLocal, runLoop, runPointers } from './runLoop.js';
import { storesOf } from './sinks.js';
import { addTableLoop, canHaveTable } from './tableLoop.js';
import { emitUpdates } from './updates.js';
import { stepHomes, vectorParts } from './vectorParts.js';

/** Copies in one function, where values pass from inputs or states straight to states or outputs. */
const COPIES_IN_BLOCK = 1000;

/** Updates in one function, a handful of instructions each. */
const UPDATES_IN_BLOCK = 300;

/** Loads Binaryen, which takes most of a second: call it early, wait for it late. */
export const loadBinaryen = async (): Promise<typeof binaryen> =>
  (await import('binaryen')).default;

/** What a module is made for. */
export interface EmitOptions {
  /** Its run loop can look for a state; see `compareState`. Costs some time in every cycle. */
  readonly comparesState?: boolean;
  /** Passes to leave out; all are made unless given. */
  readonly passes?: PassSwitches;
}

/** Emits programs as a WebAssembly module; `wasm` is the loaded Binaryen library. */
export function emitModel(
  wasm: typeof binaryen,
  cyclePrograms: CyclePrograms,
  layout: ModelLayout,
  { comparesState = false, passes = {} }: EmitOptions = {},
): WasmModel {
  const { programs, derived } = cyclePrograms;
  const module = new wasm.Module();
  try {
    module.setFeatures(wasm.Features.SIMD128 | wasm.Features.MutableGlobals);
    // A loop that looks for a state counts the cycles.
    const isGuarded = passes.guards !== false && !comparesState && canBeQuiet(cyclePrograms);
    const plan = planOf(cyclePrograms, layout, isGuarded);
    const { areas, maskAt } = plan;
    addGlobals(module, wasm.i32, areas[0]);
    const writes = isGuarded && programs[0]!.writes.length > 0;
    if (writes) module.addGlobal(WROTE, wasm.i32, true, module.i32.const(0));
    const name = isGuarded ? 'cycles' : 'run';
    addRun(wasm, module, name, cyclePrograms, plan, { comparesState, passes, writes });
    if (isGuarded) {
      const [program] = programs as [Program];
      addQuietLoop(wasm, module, name, { areas, maskAt, program, writes, layout });
    } else module.addFunctionExport(name, name);
    if (passes.tables !== false && canHaveTable(cyclePrograms, layout))
      addTableLoop(wasm, module, layout);
    const buffers = setMemory(module, cyclePrograms, plan);
    return {
      bytes: Uint8Array.from(module.emitBinary()),
      layout,
      memory: { areas, contents: plan.contents, buffers },
      states: programs[0]!.states,
      stateInverted: programs[0]!.stateInverted,
      ...(derived && derived.length > 0 && { derived }),
      faults: programs.flatMap((program) =>
        program.faults.map(({ message, place }) => ({ message, place })),
      ),
    };
  } finally {
    module.dispose();
  }
}

/** What stands where in the memory of a module, in this order, and constants behind it all. */
interface MemoryPlan {
  /** The layout of an area by each program. */
  readonly layouts: readonly AreaLayout[];
  readonly areas: readonly [number, number];
  readonly patternAt: number;
  /** See `stateMask`; empty where nothing looks for cycles in which nothing changes. */
  readonly mask: Uint8Array;
  readonly maskAt: number;
  /** Address of the contents of the memories. */
  readonly contents: number;
  readonly memories: MemoryPlaces;
  readonly pool: ConstantPool;
}

const roundUp = (value: number): number => Math.ceil(value / 64) * 64;

function planOf(
  { programs, pattern, memories: shapes }: CyclePrograms,
  { threeValued }: ModelLayout,
  isGuarded: boolean,
): MemoryPlan {
  const layouts = programs.map(layArea);
  const size = Math.max(...layouts.map((area) => area.size));
  const areas = [FIRST_AREA, FIRST_AREA + size] as const;
  const patternAt = FIRST_AREA + 2 * size;
  const mask = isGuarded ? stateMask(programs[0]!) : new Uint8Array();
  const maskAt = patternAt + roundUp(pattern.length);
  const contents = maskAt + roundUp(mask.length);
  const memories = layMemories(shapes, threeValued, contents);
  const pool = new ConstantPool(roundUp(memories.end));
  return { layouts, areas, patternAt, mask, maskAt, contents, memories, pool };
}

/** Fills the memory with what it holds at first; returns where that ends. */
function setMemory(
  module: binaryen.Module,
  { pattern }: CyclePrograms,
  { patternAt, mask, maskAt, contents, memories, pool }: MemoryPlan,
): number {
  const segments = [
    { at: patternAt, data: pattern },
    ...(mask.length > 0 ? [{ at: maskAt, data: mask }] : []),
    ...segmentsOf(memoryImage(memories)).map(({ at, data }) => ({ at: contents + at, data })),
    ...(pool.data.data.length > 0 ? [pool.data] : []),
  ].map(({ at, data }, i) => ({ name: `data${i}`, offset: module.i32.const(at), data }));
  const end = roundUp(pool.end);
  module.setMemory(Math.ceil(end / 65536), 65536, 'memory', segments, false, false, '0');
  return end;
}

/** Adds the function that runs cycles, not exported yet. */
function addRun(
  wasm: typeof binaryen,
  module: binaryen.Module,
  name: string,
  cyclePrograms: CyclePrograms,
  { layouts, areas, patternAt, memories, pool }: MemoryPlan,
  { comparesState, passes, writes }: Required<EmitOptions> & { readonly writes: boolean },
): void {
  const { programs, pattern } = cyclePrograms;
  const cycles = programs.map((program, index) =>
    cycleCode(wasm, module, program, {
      ...{ area: layouts[index]!, memories, pool, index, passes },
      ...(writes && { wrote: WROTE }),
    }),
  );
  const { fences = true, holdStates = true } = passes;
  const areaSum = areas[0] + areas[1];
  const ahead =
    holdStates && !comparesState && canHold(cyclePrograms)
      ? addHeldLoop(wasm, module, programs[0]!, {
          ...{ area: layouts[0]!, memories, pool, fences, areaSum },
        })
      : undefined;
  const place = {
    ...(ahead && { ahead }),
    ...{ areaSum, patternAt, patternLength: pattern.length },
    ...(comparesState && {
      afterCycle: (leave: () => binaryen.ExpressionRef) =>
        compareState(wasm, module, programs[0]!.stateCount, leave).afterCycle,
    }),
  };
  const localCount = Math.max(...cycles.map((cycle) => cycle.localCount));
  const locals = new Array<binaryen.Type>(localCount - RunLocal.Current).fill(wasm.i32);
  const parameters = wasm.createType(new Array(RunLocal.Current).fill(wasm.i32));
  const body = runLoop(module, wasm.i32, place, cycles);
  module.addFunction(name, parameters, wasm.i32, locals, body);
}

function addGlobals(module: binaryen.Module, i32: binaryen.Type, firstArea: number): void {
  const initial = { current: firstArea, position: 0, fault: 0 };
  for (const [name, value] of Object.entries(initial)) {
    module.addGlobal(name, i32, true, module.i32.const(value));
    module.addGlobalExport(name, name);
  }
}

/** Where the code of one cycle finds what, and which of the cycles it is. */
interface CyclePlaces {
  readonly area: AreaLayout;
  readonly memories: MemoryPlaces;
  readonly pool: ConstantPool;
  readonly index: number;
  readonly passes: PassSwitches;
  /** Global that each write to a memory sets to 1. */
  readonly wrote?: string;
}

// The code of one cycle, with its outputs packed into the response row.
function cycleCode(
  wasm: typeof binaryen,
  module: binaryen.Module,
  program: Program,
  places: CyclePlaces,
): CycleCode {
  const code =
    program.vectors === undefined
      ? plainCode(wasm, module, program, places)
      : packedCode(wasm, module, program, places);
  const { area, memories, index, wrote } = places;
  const pointers = () =>
    [RunLocal.Current, RunLocal.Next, RunLocal.Row].map((local) =>
      module.local.get(local, wasm.i32),
    );
  const writes = emitWrites(wasm, module, `cycle${index}`, area.staging, memories, pointers, wrote);
  return { ...code, statements: [...code.statements, ...writes] };
}

function plainCode(
  wasm: typeof binaryen,
  module: binaryen.Module,
  program: Program,
  { area, memories, pool, index, passes }: CyclePlaces,
): CycleCode {
  const { i32 } = wasm;
  const { fences = true } = passes;
  const isSmall = program.blockStart.length === 2 && program.stateCount < COPIES_IN_BLOCK;
  const groups = outputGroups(program, passes.aliasOutputs);
  // Beyond a stretch, what only the end of a cycle reads would be computed there.
  const { length } = program.outputs;
  const packsValues = isSmall && length <= SCALAR_OUTPUTS && program.op.length <= STRETCH;
  const sinks = storesOf(program, area, packsValues ? [] : outputsInMemory(groups));
  const emission: Emission = {
    ...{ module, i32, program, area, sinks, memories, pool, fences },
  };
  const { statements, localCount } = isSmall
    ? inlineCycle(emission, packsValues)
    : callCycle(emission, `cycle${index}`, wasm.createType([i32, i32, i32]), wasm.none);
  if (!packsValues) {
    statements.push(...packFromMemory(emission, groups, runPointers, RunLocal.Response));
  }
  const faults = program.faults.map((_, fault) => area.faults + fault);
  return { statements, localCount, faults };
}

function packedCode(
  wasm: typeof binaryen,
  module: binaryen.Module,
  program: Program,
  { area, memories, pool, index, passes }: CyclePlaces,
): CycleCode {
  const groups = outputGroups(program, passes.aliasOutputs);
  const sinks = storesOf(program, area, outputsInMemory(groups));
  const { i32 } = wasm;
  const { fences = true } = passes;
  const emission: Emission = {
    ...{ module, i32, program, area, sinks, memories, pool, fences },
  };
  const homes = stepHomes(program.vectors!, vectorParts(program.vectors!).flat());
  const statements = packedCycle(wasm, emission, `cycle${index}`, homes);
  statements.push(...packFromMemory(emission, groups, runPointers, RunLocal.Response));
  const faults = program.faults.map((_, fault) => area.faults + fault);
  return { statements, localCount: RunLocal.Free, faults };
}

type Body = Pick<CycleCode, 'statements' | 'localCount'>;

// A small circuit's whole cycle stands in the loop and costs no call.
function inlineCycle(emission: Emission, packsValues: boolean): Body {
  const { program, sinks } = emission;
  const block = new BlockEmitter(emission, 0, runPointers, RunLocal.Free);
  block.emit(packsValues ? program.outputs : []);
  for (const [value, offset] of sinks.copies) block.copy(value, offset);
  const packed = packsValues ? packFromValues(emission, block, RunLocal.Response) : [];
  const updates = emitUpdates(emission, runPointers);
  return { statements: [...block.statements, ...packed, ...updates], localCount: block.localCount };
}

const PARAMETERS: Pointers = { current: 0, next: 1, row: 2 };

function callCycle(
  emission: Emission,
  cycle: string,
  parameters: binaryen.Type,
  none: binaryen.Type,
): Body {
  const { module, program, sinks, i32 } = emission;
  const statements: binaryen.ExpressionRef[] = [];
  const add = (name: string, body: binaryen.ExpressionRef[], localCount: number): void => {
    const locals = new Array<binaryen.Type>(localCount - 3).fill(i32);
    module.addFunction(name, parameters, none, locals, module.block(LEAVE, body));
    const { Current, Next, Row } = RunLocal;
    const pointers = [Current, Next, Row].map((local) => module.local.get(local, i32));
    statements.push(module.call(name, pointers, none));
  };
  for (let b = 0; b + 1 < program.blockStart.length; b++) {
    const block = new BlockEmitter(emission, b, PARAMETERS, 3);
    block.emit();
    add(`${cycle}_block${b}`, block.statements, block.localCount);
  }
  for (let from = 0; from < sinks.copies.length; from += COPIES_IN_BLOCK) {
    // Beyond the last operation, a block has none of its own and only copies.
    const block = new BlockEmitter(emission, program.blockStart.length - 1, PARAMETERS, 3);
    for (const [value, offset] of sinks.copies.slice(from, from + COPIES_IN_BLOCK)) {
      block.copy(value, offset);
    }
    add(`${cycle}_copies${from}`, block.statements, block.localCount);
  }
  const updates = emitUpdates(emission, PARAMETERS);
  for (let from = 0; from < updates.length; from += UPDATES_IN_BLOCK) {
    add(`${cycle}_updates${from}`, updates.slice(from, from + UPDATES_IN_BLOCK), 3);
  }
  return { statements, localCount: RunLocal.Free };
}
