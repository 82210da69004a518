import * as runtime from '/runtime/index.js';

const rowOf = (ports) => {
  const bits = ports.reduce((sum, { width }) => sum + width, 0);
  return { ports, bits, words: (bits + 31) >>> 5 };
};

/** Runs random inputs through a package, as `clockstride run --random` does; signs the response. */
export async function signatureOf({ name, seed, cycles }) {
  const { load } = await import(`/${name}/model.mjs`);
  const model = await load();
  const [inputs, outputs] = [rowOf(model.inputs), rowOf(model.outputs)];
  const layout = { inputs, outputs, threeValued: model.outputWords > outputs.words };
  const signature = new runtime.Signature(layout);
  for (const block of runtime.randomStimulus(layout, seed, cycles)) {
    const response = new Uint32Array(block.cycles * model.outputWords);
    model.runRows(block.cycles, block.rows, response, block.stride);
    signature.add(response, block.cycles);
  }
  return signature.digits();
}
