import { expect } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import type { Design } from '../../compiler/compile.js';
import { compileLanes } from '../../compiler/compileLanes.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import type { Engine } from '../../runtime/engine.js';
import { LaneEngine } from '../../runtime/laneEngine.js';
import type { LaneCount } from '../../runtime/laneLayout.js';
import { LaneRows } from '../../runtime/laneRows.js';
import { courseOf } from './engines.js';
import { randomRows } from './responses.js';

const emitter = localEmitter();

/** The compiled lanes of a design. */
export const laneEngineOf = async (design: Design, lanes: LaneCount): Promise<LaneEngine> =>
  LaneEngine.create(await compileLanes(design, lanes, emitter));

/** What each lane does in `expectLanesAsAlone`. */
export interface LaneTrial {
  readonly cycles: number;
  readonly seed: number;
  /** The lanes that are compared; all unless given. */
  readonly compared?: readonly number[];
  /** What a lane is compared with: the reference unless given. */
  readonly alone?: Engine;
}

/**
 * Runs all lanes of a design, each from a power-up and with a stimulus of its own, and expects of
 * each the response, the state and the cycle without result of a run alone.
 */
export async function expectLanesAsAlone(
  design: Design,
  lanes: LaneCount,
  { cycles, seed, compared, alone }: LaneTrial,
): Promise<void> {
  const { circuit, layout } = design;
  const { inputs, outputs, threeValued } = layout;
  const engine = await laneEngineOf(design, lanes);
  const mode = threeValued ? 'unknown' : 'random';
  const all = Array.from({ length: lanes }, (_, lane) => lane);
  const states = all.map((lane) => powerUpState(circuit, mode, seed + lane));
  const stimuli = all.map((lane) => randomRows(layout, seed + lane, cycles));
  engine.reset(states);
  const into = new LaneRows(inputs, threeValued, lanes);
  const out = new LaneRows(outputs, threeValued, lanes);
  const response = new Uint32Array(cycles * out.stride);
  engine.run(cycles, into.pack(stimuli, cycles), into.stride, response);
  const single = alone ?? new ReferenceEngine(circuit, design);
  const responses = out.unpackAll(response, cycles);
  for (const lane of compared ?? all) {
    const course = courseOf(single, states[lane]!, stimuli[lane]!, cycles);
    const fault = engine.faults.find((found) => found.lane === lane);
    expect(fault?.cycle ?? cycles, `end of lane ${lane}`).toBe(course.cycles);
    const seen = responses[lane]!.subarray(0, course.response.length);
    expect(seen, `response of lane ${lane}`).toEqual(course.response);
    if (course.state === undefined) continue;
    expect(engine.state(lane), `state of lane ${lane}`).toEqual(course.state);
  }
}
