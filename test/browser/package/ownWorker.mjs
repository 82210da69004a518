import { signatureOf } from './signatureOf.mjs';

// A rejection inside a worker does not reach the page by itself.
globalThis.onmessage = ({ data }) =>
  signatureOf(data).then(
    (signature) => postMessage({ signature }),
    (error) => postMessage({ error: String(error) }),
  );
