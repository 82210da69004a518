import { parentPort } from 'node:worker_threads';
import type { ModelLayout } from '../../runtime/layout.js';
import type { Program } from '../program/program.js';
import { emitModel, loadBinaryen } from './emitModel.js';

// The thread of `startEmitter`: one program at a time in, its model out.
const binaryen = loadBinaryen();

parentPort?.on('message', async (request: { program: Program; layout: ModelLayout }) => {
  const model = emitModel(await binaryen, request.program, request.layout);
  parentPort?.postMessage(model, [model.bytes.buffer]);
});
