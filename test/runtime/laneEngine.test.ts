import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { compileLanes } from '../../compiler/compileLanes.js';
import { LaneEngine } from '../../runtime/laneEngine.js';
import { LaneRows } from '../../runtime/laneRows.js';
import { laneEngineOf } from '../support/lanes.js';
import { ownDesign } from '../support/ownCircuits.js';
import { randomRows } from '../support/responses.js';
import { smallCircuit } from '../support/smallCircuit.js';

const LANES = 64;
const CYCLES = 1500;

const design = ownDesign('uart');
const { layout, circuit } = design;
const into = new LaneRows(layout.inputs, false, LANES);
const out = new LaneRows(layout.outputs, false, LANES);
const states = Array.from({ length: LANES }, (_, lane) => powerUpState(circuit, 'random', lane));
const common = randomRows(layout, 1, CYCLES);

/** Response and end state of the lanes from `states`, run as told. */
async function courseOf(run: (engine: LaneEngine, response: Uint32Array) => void) {
  const engine = await laneEngineOf(design, LANES);
  engine.reset(states);
  const response = new Uint32Array(CYCLES * out.stride);
  run(engine, response);
  expect(engine.cycles).toBe(CYCLES);
  return { response, states: [0, 1, LANES - 1].map((lane) => engine.state(lane)) };
}

describe('a lane engine', () => {
  const rows = into.spread(common, CYCLES);
  const whole = courseOf((engine, response) => engine.run(CYCLES, rows, into.stride, response));

  it('runs all lanes alike as with the same rows in each', async () => {
    const { words } = layout.inputs;
    const alike = courseOf((engine, response) => engine.runAlike(CYCLES, common, words, response));
    expect(await alike).toEqual(await whole);
  });

  it('goes on where it was', async () => {
    const inParts = courseOf((engine, response) => {
      for (
        let done = 0, part = 1;
        done < CYCLES;
        done += part, part = Math.min(part * 2, CYCLES - done)
      ) {
        const to = response.subarray(done * out.stride);
        engine.run(part, rows.subarray(done * into.stride), into.stride, to);
      }
    });
    expect(await inParts).toEqual(await whole);
  });

  it('runs in place as with arrays', async () => {
    const inPlace = courseOf((engine, response) => {
      for (let done = 0; done < CYCLES; ) {
        const count = Math.min(engine.rows, CYCLES - done);
        const from = rows.subarray(done * into.stride, (done + count) * into.stride);
        engine.stimulusRows.set(from);
        engine.runInPlace(count);
        response.set(engine.responseRows.subarray(0, count * out.stride), done * out.stride);
        done += count;
      }
    });
    expect(await inPlace).toEqual(await whole);
  });

  it('reads rows that stand apart, and holds one', async () => {
    const apart = new Uint32Array(CYCLES * (into.stride + 3));
    for (let i = 0; i < CYCLES; i++) {
      const row = rows.subarray(i * into.stride, (i + 1) * into.stride);
      apart.set(row, i * (into.stride + 3));
    }
    const spaced = courseOf((engine, response) =>
      engine.run(CYCLES, apart, into.stride + 3, response),
    );
    expect(await spaced).toEqual(await whole);
    const held = courseOf((engine, response) => engine.run(CYCLES, rows, 0, response));
    const same = into.spread(
      new Uint32Array(CYCLES * into.packedStride).map((_, i) => common[i % into.packedStride]!),
      CYCLES,
    );
    const repeated = courseOf((engine, response) =>
      engine.run(CYCLES, same, into.stride, response),
    );
    expect(await held).toEqual(await repeated);
    const unseen = courseOf((engine) => engine.runAlike(CYCLES, common, 0));
    expect((await unseen).states).toEqual((await held).states);
  });

  it('shares nothing but memory with engines made together with it', async () => {
    const model = await compileLanes(design, LANES);
    const engines = await LaneEngine.createMany(model, 3);
    const responses = engines.map(() => new Uint32Array(CYCLES * out.stride));
    for (const engine of engines) engine.reset(states);
    for (let done = 0; done < CYCLES; done += 100) {
      for (const [i, engine] of engines.entries()) {
        const to = responses[i]!.subarray(done * out.stride);
        engine.run(100, rows.subarray(done * into.stride), into.stride, to);
      }
    }
    for (const response of responses) expect(response).toEqual((await whole).response);
  });

  it('takes one state for all lanes, and gives it back', async () => {
    const engine = await laneEngineOf(design, LANES);
    engine.run(3, rows, into.stride);
    engine.reset(states[5]!);
    expect(engine.cycles).toBe(0);
    for (const lane of [0, 31, 32, 63]) expect(engine.state(lane)).toEqual(states[5]);
  });

  it('lets lanes that have ended go on again after a reset', async () => {
    // The ring settles at 1 while q is 0, and never where q makes an inverter of it.
    const ring = smallCircuit({
      inputs: ['clk'],
      outputs: ['r'],
      gates: { r: 'nand r q' },
      registers: { q: { clock: 'clk', data: 'q' } },
    });
    const engine = await laneEngineOf(designOf(ring), 32);
    const each = Array.from({ length: 32 }, (_, lane) => Uint8Array.of(lane === 9 ? 1 : 0, 1));
    for (let i = 0; i < 2; i++) {
      engine.reset(each);
      engine.run(10, new Uint32Array(0), 0);
      expect(engine.faults.map(({ lane, cycle }) => [lane, cycle])).toEqual([[9, 0]]);
      expect(engine.faults[0]!.message).toMatch(/does not settle: r\b/);
      expect([...engine.running]).toEqual([~(1 << 9) >>> 0]);
      expect(engine.state(8)).toEqual(Uint8Array.of(0, 1));
    }
  });

  it('refuses what does not fit', async () => {
    const engine = await laneEngineOf(design, LANES);
    const row = new Uint32Array(into.stride);
    expect(() => engine.reset(states.slice(1))).toThrow('expected 64 states, got 63');
    expect(() => engine.reset(new Uint8Array(1))).toThrow('expected 37 state values, got 1');
    expect(() => engine.state(64)).toThrow('lanes are 0 to 63, got 64');
    expect(() => engine.run(-1, row, 0)).toThrow('cycles is a count, got -1');
    expect(() => engine.run(2, row, into.stride)).toThrow(/stimulus needs \d+ numbers, got \d+/);
    expect(() => engine.run(1, row, 1)).toThrow(/stimulusStride is 0 or at least \d+, got 1/);
    expect(() => engine.run(1, row, 0, new Uint32Array(1))).toThrow(/response needs \d+ numbers/);
    expect(() => engine.runInPlace(engine.rows + 1)).toThrow(RangeError);
    const model = await compileLanes(design, LANES);
    await expect(LaneEngine.createMany(model, 0)).rejects.toThrow(RangeError);
  });
});
