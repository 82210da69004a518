import { nodeModule } from '../nodeModule.js';
import { packagedModule } from '../source.js';

/** A worker, of the web or of Node. */
export interface Thread {
  post(message: unknown): void;
  listen(onMessage: (message: unknown) => void, onError: (error: Error) => void): void;
  end(): void;
}

/** What is used of a worker thread of Node, whose types pages need not have. */
interface NodeWorker {
  postMessage(message: unknown): void;
  terminate(): unknown;
  on(event: 'message', listener: (message: unknown) => void): this;
  on(event: 'error', listener: (error: Error) => void): this;
}

interface NodeThreads {
  readonly Worker: new (file: URL) => NodeWorker;
}

/** Starts `worker.mjs` of this package, where it lies beside `model.mjs`. */
export async function startThread(): Promise<Thread> {
  // The form that bundlers know: they put the worker's file in place and mend its address.
  if (globalThis.Worker) {
    return threadOf(new Worker(new URL('./worker.mjs', import.meta.url), { type: 'module' }));
  }
  const threads = await nodeModule<NodeThreads>('worker_threads');
  return threadOf(new threads.Worker(new URL('worker.mjs', packagedModule())));
}

/** The thread of a worker that has been started. */
export function threadOf(worker: Worker | NodeWorker): Thread {
  return {
    post: (message) => worker.postMessage(message),
    end: () => void worker.terminate(),
    listen: (onMessage, onError) => {
      if ('on' in worker) {
        worker.on('message', onMessage).on('error', onError);
        return;
      }
      worker.onmessage = ({ data }) => onMessage(data);
      worker.onerror = ({ message }) =>
        onError(new Error(message || 'the worker of the model does not start'));
    },
  };
}
