import { load, loadInWorker } from 'packed-lock';

/** The same few cycles in the page and in a worker. */
export async function results() {
  const model = await load();
  model.write({ reset: 1 }).step(2).write({ reset: 0, call_below: 1, level_low: 1 }).step(20);
  const worker = await loadInWorker();
  await worker.restore(model.save());
  await worker.step(30);
  const there = await worker.read();
  worker.dispose();
  return { there, here: model.step(30).read() };
}

globalThis.results = results;
