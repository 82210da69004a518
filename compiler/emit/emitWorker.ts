import { parentPort } from 'node:worker_threads';
import type { ModelLayout } from '../../runtime/layout.js';
import type { CyclePrograms } from '../program/program.js';
import { emitModel, loadBinaryen } from './emitModel.js';

// The thread of `startEmitter`: one program at a time in, its model out.
const binaryen = loadBinaryen();

parentPort?.on('message', async (request: { programs: CyclePrograms; layout: ModelLayout }) => {
  const model = emitModel(await binaryen, request.programs, request.layout);
  parentPort?.postMessage(model, [model.bytes.buffer]);
});
