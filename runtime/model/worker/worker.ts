import { nodeModule } from '../nodeModule.js';
import { type Port, serve } from './serve.js';

// What `worker.mjs` does. A worker of the web must listen before its module has ended.
if (typeof self === 'undefined') {
  nodeModule<{ parentPort: Port }>('worker_threads').then(({ parentPort }) => serve(parentPort));
} else {
  serve(self as unknown as Port);
}
