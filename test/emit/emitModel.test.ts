import { describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import { designOf, programsOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { emitModel, loadBinaryen } from '../../compiler/emit/emitModel.js';
import { localEmitter, startEmitter } from '../../compiler/emit/emitter.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';

const designNamed = (name: string) => {
  const text = [...circuits.find((circuit) => circuit.name === name)!.write()].join('');
  const circuit = readNetlist([new Source(`${name}.v`, text)], {}, new Diagnostics());
  return designOf(circuit!);
};

describe('emitModel', () => {
  const design = designNamed('sha256');
  const programs = programsOf(design);

  it('makes a valid module of functions of bounded size', async () => {
    const model = emitModel(await loadBinaryen(), programs, design.layout);
    expect(WebAssembly.validate(model.bytes)).toBe(true);
    const module = await WebAssembly.compile(model.bytes);
    const names = WebAssembly.Module.exports(module).map(({ name }) => name);
    expect(names.sort()).toEqual(['current', 'fault', 'memory', 'position', 'quiet', 'run']);
    expect(WebAssembly.Module.imports(module)).toEqual([]);
    expect(programs.programs[0]!.blockStart.length).toBeGreaterThan(4);
  });

  it('makes equal bytes of equal programs', async () => {
    const wasm = await loadBinaryen();
    const first = emitModel(wasm, programs, design.layout);
    const again = emitModel(wasm, programsOf(design), design.layout);
    expect(again.bytes).toEqual(first.bytes);
  });

  it('leaves room in memory for the rows of stimulus and response', async () => {
    const model = emitModel(await loadBinaryen(), programs, design.layout);
    const [first, second] = model.memory.areas;
    expect(second).toBeGreaterThanOrEqual(first + model.states.length);
    expect(model.memory.buffers).toBeGreaterThanOrEqual(second + model.states.length);
    const engine = await WasmEngine.create(model);
    const stimulus = new Uint32Array(5000 * design.layout.inputs.words);
    const response = new Uint32Array(5000 * design.layout.outputs.words);
    engine.run(5000, stimulus, design.layout.inputs.words, response);
    expect(response.every((word) => word === response[0] || word === 0)).toBe(true);
  });
});

describe('an emitter', () => {
  it('gives the same model wherever it works', async () => {
    const design = designNamed('counter');
    const started = startEmitter();
    const models = await Promise.all(
      [localEmitter(), started].map((emitter) => emitter.emit(programsOf(design), design.layout)),
    );
    await started.close();
    expect(models[1]!.bytes).toEqual(models[0]!.bytes);
  });
});
