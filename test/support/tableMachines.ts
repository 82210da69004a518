import { compile, type Design } from '../../compiler/compile.js';
import type { Emitter } from '../../compiler/emit/emitter.js';
import { type Engine, RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';

/** The compiled engine of a design, once with its table and once by straight-line code alone. */
export async function bothWays(
  design: Design,
  emitter?: Emitter,
): Promise<{ byTable: WasmEngine; straight: WasmEngine }> {
  const model = await compile(design, emitter);
  const module = await WebAssembly.compile(model.bytes);
  return {
    byTable: await WasmEngine.create(model, module),
    straight: await WasmEngine.create(model, module, { usesTable: false }),
  };
}

/** What is done to an engine in the course of a run. */
export type Step =
  | { readonly do: 'run'; readonly cycles: number; readonly observed: boolean }
  | { readonly do: 'hold'; readonly cycles: number }
  | { readonly do: 'look' }
  /** Of engines that can. */
  | { readonly do: 'preview' }
  | { readonly do: 'reset' }
  | { readonly do: 'save' }
  | { readonly do: 'restore' };

/** Does the steps and tells everything that can be seen of them. */
export function storyOf(
  engine: Engine,
  start: Uint8Array,
  rows: Uint32Array,
  steps: readonly Step[],
): unknown[] {
  const { inputs, outputs, threeValued } = engine.layout;
  const stride = rowStride(inputs, threeValued);
  const story: unknown[] = [];
  engine.reset(start);
  let point = engine.save();
  let at = 0;
  const run = (cycles: number, step: number, observed: boolean): void => {
    const response = new Uint32Array(cycles * rowStride(outputs, threeValued));
    try {
      engine.run(cycles, rows.subarray(at * stride), step, observed ? response : undefined);
      story.push(response);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      const { completed, message } = error;
      story.push(
        completed,
        message,
        response.slice(0, completed * rowStride(outputs, threeValued)),
      );
    }
    at += step === 0 ? 1 : cycles;
  };
  const preview = (): void => {
    const response = new Uint32Array(rowStride(outputs, threeValued));
    try {
      (engine as WasmEngine).preview(rows.subarray(at * stride), response);
      story.push(response);
    } catch (error) {
      if (!(error instanceof RunFault)) throw error;
      story.push(error.message);
    }
  };
  for (const step of steps) {
    if (step.do === 'run') run(step.cycles, stride, step.observed);
    else if (step.do === 'hold') run(step.cycles, 0, true);
    else if (step.do === 'look') story.push(engine.state());
    else if (step.do === 'preview') preview();
    else if (step.do === 'reset') engine.reset(start);
    else if (step.do === 'save') point = engine.save();
    else engine.restore(point);
  }
  story.push(engine.state());
  return story;
}
