import * as runtime from '/runtime/index.js';
import { signatureOf } from './signatureOf.mjs';

globalThis.signatureInPage = (job) => signatureOf(runtime, job);

globalThis.signatureInWorker = (job) =>
  new Promise((resolve, reject) => {
    const worker = new Worker('/page/worker.mjs', { type: 'module' });
    worker.onmessage = ({ data }) => {
      worker.terminate();
      if (data.error === undefined) resolve(data.signature);
      else reject(new Error(data.error));
    };
    worker.onerror = ({ message }) => reject(new Error(message ?? 'the worker does not load'));
    worker.postMessage(job);
  });
