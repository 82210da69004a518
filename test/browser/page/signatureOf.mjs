const bytesOf = (base64) => Uint8Array.from(atob(base64), (character) => character.charCodeAt(0));

const modelFrom = (text) =>
  JSON.parse(text, (_, value) => (value?.base64 === undefined ? value : bytesOf(value.base64)));

/**
 * Runs a job (see `jobs.ts`) with the functions of a built runtime; returns the signature of the
 * response. Needs nothing that a page, a worker and Node do not all have.
 */
export async function signatureOf(runtime, { model, state, seed, cycles }) {
  const engine = await runtime.WasmEngine.create(modelFrom(model));
  engine.reset(Uint8Array.from(state));
  const signature = new runtime.Signature(engine.layout);
  const stimulus = runtime.randomStimulus(engine.layout, seed, cycles);
  for (const block of runtime.runBlocksSync(engine, stimulus)) {
    signature.add(block.rows, block.cycles);
  }
  return signature.digits();
}
