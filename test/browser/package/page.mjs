import { signatureOf } from './signatureOf.mjs';

globalThis.signatureInPage = signatureOf;

globalThis.signatureInOwnWorker = (run) =>
  new Promise((resolve, reject) => {
    const worker = new Worker('/page/ownWorker.mjs', { type: 'module' });
    worker.onmessage = ({ data }) => {
      worker.terminate();
      if (data.error === undefined) resolve(data.signature);
      else reject(new Error(data.error));
    };
    worker.onerror = ({ message }) => reject(new Error(message ?? 'the worker does not load'));
    worker.postMessage(run);
  });

// A block in the page and the same one in the worker of the package.
globalThis.compareWorker = async (name, cycles) => {
  const { load, loadInWorker } = await import(`/${name}/model.mjs`);
  const [here, there] = [await load(), await loadInWorker(undefined, { verify: true })];
  const stimulus = { start: Uint8Array.from({ length: cycles }, (_, i) => Number(i % 11 === 0)) };
  const request = { cycles, stimulus, response: ['done', 'ciphertext'] };
  let told = 0;
  const [one, other] = [
    here.run(request),
    await there.run(request, {
      onProgress: (done) => {
        told = done;
      },
    }),
  ];
  const state = [here.save(), await there.save()].map((saved) => JSON.stringify(saved));
  const abort = new AbortController();
  const endless = there.step(1e12, { signal: abort.signal, onProgress: () => abort.abort() });
  const ended = await endless.catch((error) => error.name);
  const cycle = there.cycle;
  there.dispose();
  return {
    isSame: JSON.stringify(one) === JSON.stringify(other) && state[0] === state[1],
    ones: one.response.done.reduce((sum, bit) => sum + bit, 0),
    told,
    ended,
    passed: cycle - cycles,
  };
};

// Some lanes of a package and a model of one sequence for each of them, by way of saved states.
globalThis.compareLanes = async (lanesName, name) => {
  const lanes = await (await import(`/${lanesName}/model.mjs`)).load(undefined, { verify: true });
  const { compile, load } = await import(`/${name}/model.mjs`);
  const module = await compile();
  const compared = [0, 9, 31];
  const givenTo = (lane) => ({ call_below: lane % 2, call_above: lane % 3, level_low: 1 });
  const [expected, actual] = [[], []];
  lanes.write({ reset: 1 }).step(2).write({ reset: 0, doorway_clear: 1 });
  for (const lane of compared) lanes.write(givenTo(lane), lane);
  lanes.step(500);
  for (const lane of compared) {
    const model = await load(module);
    model
      .write({ reset: 1 })
      .step(2)
      .write({ reset: 0, doorway_clear: 1, ...givenTo(lane) });
    expected.push(JSON.stringify(model.step(500).save()));
    actual.push(JSON.stringify(lanes.save(lane)));
  }
  return { lanes: lanes.lanes, expected, actual };
};

// Loads and disposes of models, keeps what is left of them, and counts instances not let go.
globalThis.loadRounds = async (name, rounds) => {
  globalThis.liveInstances = 0;
  // A weak reference would keep its instance to the end of the task, and there is no room for all.
  const registry = new FinalizationRegistry(() => liveInstances--);
  const { instantiate } = WebAssembly;
  WebAssembly.instantiate = async (...args) => {
    const instance = await instantiate.apply(WebAssembly, args);
    liveInstances++;
    registry.register(instance);
    return instance;
  };
  const { compile, load } = await import(`/${name}/model.mjs`);
  const module = await compile();
  globalThis.disposed = [];
  let made = 0;
  for (let i = 0; i < rounds; i++) {
    const model = await load(module);
    model.subscribe(() => {});
    made += model.step(3).cycle;
    model.dispose();
    disposed.push(model);
  }
  WebAssembly.instantiate = instantiate;
  return made;
};
