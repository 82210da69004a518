export { RunFault } from '../engine.js';
export { identity } from './identity.js';
export { load } from './load.js';
export { Model } from './model.js';
export { valueText } from './nets.js';
export { compile } from './source.js';
export { WorkerModel } from './worker/client.js';
export { loadInWorker } from './worker/loadInWorker.js';
