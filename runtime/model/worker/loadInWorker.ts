import type { LoadOptions } from '../load.js';
import { type ModelSource, packagedModule } from '../source.js';
import { WorkerModel } from './client.js';
import { startThread, threadOf } from './thread.js';

/** How a model is loaded in a worker. */
export interface WorkerOptions extends LoadOptions {
  /** A worker that runs `worker.mjs`, where it is not found beside `model.mjs`. */
  readonly worker?: Worker;
}

/** Starts a worker and loads the model there. */
export async function loadInWorker(
  source: ModelSource | Promise<ModelSource> = packagedModule(),
  { worker, ...options }: WorkerOptions = {},
): Promise<WorkerModel> {
  const sent = await sendable(await source);
  const thread = worker ? threadOf(worker) : await startThread();
  return WorkerModel.load(thread, sent, options);
}

// The worker has an address of its own, and cannot be sent a response.
async function sendable(source: ModelSource): Promise<unknown> {
  if (source instanceof Response) return source.arrayBuffer();
  if (typeof source !== 'string' && !(source instanceof URL)) return source;
  return new URL(source, globalThis.location?.href).href;
}
