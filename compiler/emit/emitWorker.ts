import { parentPort } from 'node:worker_threads';
import type { LaneCount } from '../../runtime/laneLayout.js';
import type { ModelLayout } from '../../runtime/layout.js';
import type { LanePrograms } from '../program/laneProgram.js';
import type { CyclePrograms } from '../program/program.js';
import { type EmitOptions, emitModel, loadBinaryen } from './emitModel.js';
import { emitLanes } from './lanes/emitLanes.js';

// The thread of `startEmitter`: one program at a time in, its model out.
const binaryen = loadBinaryen();

/** What the thread is asked for: a model of one sequence or of lanes. */
export type EmitRequest =
  | {
      readonly programs: CyclePrograms;
      readonly layout: ModelLayout;
      readonly options: EmitOptions;
    }
  | { readonly programs: LanePrograms; readonly layout: ModelLayout; readonly lanes: LaneCount };

parentPort?.on('message', async (request: EmitRequest) => {
  const wasm = await binaryen;
  const model =
    'lanes' in request
      ? emitLanes(wasm, request.programs, request.layout, request.lanes)
      : emitModel(wasm, request.programs, request.layout, request.options);
  parentPort?.postMessage(model, [model.bytes.buffer]);
});
