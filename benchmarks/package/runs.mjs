/** Milliseconds from nothing to the outputs after the first step. */
export async function loadAndStep(address) {
  const started = performance.now();
  const { load } = await import(address);
  const model = await load();
  model.step().read();
  return performance.now() - started;
}

const BLOCK = 4096;
const SETTLING_MS = 400;
const MEASURED_MS = 700;

/** Cycles a second on random rows, once the engine has settled on its code. */
export async function cyclesPerSecond(address) {
  const { load } = await import(address);
  const model = await load();
  const stimulus = new Uint32Array(BLOCK * model.inputWords);
  for (let i = 0; i < stimulus.length; i++) stimulus[i] = Math.random() * 2 ** 32;
  const response = new Uint32Array(BLOCK * model.outputWords);
  const runFor = (milliseconds) => {
    const started = performance.now();
    for (let cycles = 0; ; cycles += BLOCK) {
      const passed = performance.now() - started;
      if (passed >= milliseconds) return (cycles * 1000) / passed;
      model.runRows(BLOCK, stimulus, response);
    }
  };
  runFor(SETTLING_MS);
  return runFor(MEASURED_MS);
}
