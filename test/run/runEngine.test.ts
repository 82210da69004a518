import { describe, expect, it } from 'vitest';
import type { BackgroundCompiler } from '../../compiler/background/compileThread.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, type Design } from '../../compiler/compile.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { runEngine } from '../../compiler/run/runEngine.js';
import { courseOf } from '../support/engines.js';
import { ownDesign } from '../support/ownCircuits.js';
import { randomRows } from '../support/responses.js';

const CYCLES = 40;
const design = ownDesign('uart');
const start = powerUpState(design.circuit, 'zero', 0);

/** A compiler that counts what it is asked for. */
function countingCompiler() {
  const asked = { times: 0 };
  const unexpected = () => Promise.reject(new Error('not asked for'));
  const compiler: BackgroundCompiler = {
    prepare: () => {},
    compile: () => {
      asked.times++;
      return compile(design, undefined, { start });
    },
    emit: unexpected,
    emitLanes: unexpected,
    close: async () => {},
  };
  return { asked, compiler };
}

const engineOf = (of: Design, emitter: BackgroundCompiler, cycles?: number) =>
  runEngine(of, {
    ...{ engine: 'wasm', marks: false, start, emitter },
    ...(cycles !== undefined && { cycles }),
  });

describe('runEngine', () => {
  it.each([
    ['interprets a run of a thousand cycles', 1000, 0],
    ['compiles for a longer one', 1001, 1],
    ['compiles where the length is not known', undefined, 1],
  ])('%s', async (_, cycles, compiled) => {
    const { asked, compiler } = countingCompiler();
    const engine = await engineOf(design, compiler, cycles);
    expect(asked.times).toBe(compiled);
    const rows = randomRows(design.layout, 1, CYCLES);
    const reference = new ReferenceEngine(design.circuit, design);
    expect(courseOf(engine, start, rows, CYCLES)).toEqual(courseOf(reference, start, rows, CYCLES));
  });
});
