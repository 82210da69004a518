import type { WasmModel } from '../../runtime/wasmModel.js';
import type { Port } from '../circuit/circuit.js';
import { modelLayout } from '../circuit/modelLayout.js';
import { type Design, programsOf } from '../compile.js';
import type { Emitter } from '../emit/emitter.js';
import type { LogicState } from '../logic/logic.js';

/** A design that has other outputs. */
export function withOutputs(design: Design, outputs: readonly Port[]): Design {
  const circuit = { ...design.circuit, outputs };
  const layout = modelLayout(circuit, design.clocks, design.layout.threeValued);
  return { ...design, circuit, layout };
}

/**
 * Compiles a module that computes inner nets of a design from its state and inputs, and nothing
 * else: it has no next state. It costs the model no time, since it runs only when someone looks.
 */
export async function compileProbes(
  design: Design,
  probes: readonly Port[],
  emitter: Emitter,
): Promise<WasmModel> {
  const probed = withOutputs(design, probes);
  const cycles = programsOf(probed, true);
  const states = cycles.programs[0]!.states;
  // Nothing is stored for a state bit that is unused.
  const programs = cycles.programs.map((program) => ({ ...program, states: states.map(unused) }));
  const model = await emitter.emit({ ...cycles, programs }, probed.layout);
  return { ...model, states };
}

const unused = (): LogicState => ({ role: 'unused', index: 0 });
