import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { CacheStore } from '../../compiler/cache/cacheStore.js';
import { ModelCache } from '../../compiler/cache/modelCache.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, designOf } from '../../compiler/compile.js';
import { ownDesign } from '../support/ownCircuits.js';

const folder = mkdtempSync(join(tmpdir(), 'clockstride-models-'));
afterAll(() => rmSync(folder, { recursive: true }));

describe('a model that has been compiled before', () => {
  const design = ownDesign('uart');
  const start = powerUpState(design.circuit, 'zero');

  it('is found again', async () => {
    const store = new CacheStore(join(folder, 'a'), '1');
    const models = new ModelCache(store, 'uart');
    expect(models.find(design, { start })).toBeUndefined();
    const model = await compile(design, undefined, { start });
    models.keep(design, { start }, model);
    await store.flush();
    expect(models.find(design, { start })).toEqual(model);
    expect(await WebAssembly.compile(models.find(design, { start })!.bytes)).toBeDefined();
  });

  it('is another one for another circuit, start, outputs, values, clocks and option', async () => {
    const store = new CacheStore(join(folder, 'b'), '1');
    const models = new ModelCache(store, 'uart');
    models.keep(design, { start }, await compile(design, undefined, { start }));
    await store.flush();
    const { circuit, layout } = design;
    const other = start.slice();
    other[0]! ^= 1;
    const [first, ...rest] = circuit.outputs;
    const fewer = { ...circuit, outputs: rest };
    const moved = { ...first!, nets: first!.nets.map((net) => net + 1) };
    const timings = [{ port: 'clk', period: 4, offset: 1 }];
    expect(new ModelCache(store, 'lock').find(design, { start })).toBeUndefined();
    expect(models.find(design, {})).toBeUndefined();
    expect(models.find(design, { start: other })).toBeUndefined();
    expect(models.find(design, { start, comparesState: true })).toBeUndefined();
    expect(models.find({ ...design, circuit: fewer }, { start })).toBeUndefined();
    const changed = { ...circuit, outputs: [moved, ...rest] };
    expect(models.find({ ...design, circuit: changed }, { start })).toBeUndefined();
    const three = { ...design, layout: { ...layout, threeValued: true } };
    expect(models.find(three, { start })).toBeUndefined();
    expect(models.find(designOf(circuit, { timings }), { start })).toBeUndefined();
    expect(models.find(design, { start })).toBeDefined();
  });
});
