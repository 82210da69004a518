import { compile, type Design, programsOf } from '../../compiler/compile.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { type Engine, RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { bothWays } from './tableMachines.js';

const emitter = localEmitter();

/** The compiled engine of a design. */
export const wasmEngineOf = async (design: Design): Promise<WasmEngine> =>
  WasmEngine.create(await compile(design, emitter));

/** All engines of a design: the reference, and what is checked against it. */
export async function enginesOf(design: Design): Promise<{
  reference: Engine;
  others: readonly (readonly [name: string, engine: Engine])[];
}> {
  const { byTable, straight } = await bothWays(design, emitter);
  return {
    reference: new ReferenceEngine(design.circuit, design),
    others: [
      ['bytecode', new BytecodeEngine(programsOf(design), design.layout)],
      ['wasm by table where it can', byTable],
      ['wasm', straight],
    ],
  };
}

/** What an engine did: its packed response rows, and its state after them. */
export interface Course {
  /** Rows of the cycles that had a result. */
  readonly response: Uint32Array;
  readonly cycles: number;
  /** Undefined after a cycle without result. */
  readonly state: Uint8Array | undefined;
  /** The contents of memories, as `state`. */
  readonly memory: Uint8Array | undefined;
}

/** Resets an engine and runs it over packed stimulus rows, up to a cycle without result. */
export function courseOf(
  engine: Engine,
  state: Uint8Array,
  rows: Uint32Array,
  cycles: number,
  contents?: Uint8Array,
): Course {
  const { inputs, outputs, threeValued } = engine.layout;
  const stride = rowStride(outputs, threeValued);
  const response = new Uint32Array(cycles * stride);
  engine.reset(state);
  if (contents !== undefined) engine.loadMemory(contents);
  try {
    engine.run(cycles, rows, rowStride(inputs, threeValued), response);
    return { response, cycles, state: engine.state(), memory: engine.memoryState() };
  } catch (error) {
    if (!(error instanceof RunFault)) throw error;
    const { completed } = error;
    const ended = { cycles: completed, state: undefined, memory: undefined };
    return { response: response.slice(0, completed * stride), ...ended };
  }
}
