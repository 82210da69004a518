import { parentPort } from 'node:worker_threads';
import type { LaneModel } from '../../runtime/laneModel.js';
import type { WasmModel } from '../../runtime/wasmModel.js';
import { packedPrograms } from '../compile.js';
import { emitModel, loadBinaryen } from '../emit/emitModel.js';
import { emitLanes } from '../emit/lanes/emitLanes.js';
import type { CompileAnswer, CompileRequest } from './compileThread.js';

// The thread of `startCompiler`. Loading Binaryen takes as long as many passes: it starts at once.
const binaryen = loadBinaryen();

async function modelOf({ layout, work }: CompileRequest): Promise<WasmModel | LaneModel> {
  if ('programs' in work) return emitModel(await binaryen, work.programs, layout, work.options);
  if ('lanes' in work) return emitLanes(await binaryen, work.lanePrograms, layout, work.lanes);
  const { start, ...options } = work.options;
  const programs = packedPrograms(work.cycles, start, options.passes);
  const model = emitModel(await binaryen, programs, layout, options);
  return start === undefined ? model : { ...model, start };
}

parentPort?.on('message', async (request: CompileRequest) => {
  const { id } = request;
  try {
    const model = await modelOf(request);
    parentPort?.postMessage({ id, model } satisfies CompileAnswer, [model.bytes.buffer]);
  } catch (error) {
    parentPort?.postMessage({ id, error } satisfies CompileAnswer);
  }
});
