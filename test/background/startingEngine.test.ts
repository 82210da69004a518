import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { StartingEngine } from '../../compiler/background/startingEngine.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import {
  compile,
  cyclesOf,
  type Design,
  designOf,
  quickProgramsOf,
} from '../../compiler/compile.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { type Engine, RunFault } from '../../runtime/engine.js';
import { rowStride } from '../../runtime/layout.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { courseOf } from '../support/engines.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { randomRows } from '../support/responses.js';
import { smallCircuit } from '../support/smallCircuit.js';

const SEED = 20260807;
const CYCLES = 30;

const quick = (design: Design): BytecodeEngine =>
  new BytecodeEngine(quickProgramsOf(cyclesOf(design)), design.layout);

/** Runs an engine over rows and lets another one take over after some cycles. */
async function responseOf(design: Design, start: Uint8Array, rows: Uint32Array, change: number) {
  const { inputs, outputs, threeValued } = design.layout;
  const [step, stride] = [rowStride(inputs, threeValued), rowStride(outputs, threeValued)];
  let resolve!: (engine: Engine) => void;
  const faster = new Promise<Engine>((done) => {
    resolve = done;
  });
  const engine = new StartingEngine(quick(design), faster);
  engine.reset(start);
  const response = new Uint32Array(CYCLES * stride);
  engine.run(change, rows, step, response);
  resolve(await WasmEngine.create(await compile(design, undefined, { start })));
  await faster;
  engine.run(
    CYCLES - change,
    rows.subarray(change * step),
    step,
    response.subarray(change * stride),
  );
  return { response, state: engine.state(), memory: engine.memoryState() };
}

const holdsFor = (options: RandomCircuitOptions, threeValued: boolean, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(
      randomCircuit(options),
      fc.nat(1e6),
      fc.nat(CYCLES),
      async (circuit, seed, change) => {
        const timings = [
          { port: 'clk', period: 2, offset: 0 },
          { port: 'clk2', period: 3, offset: 1 },
        ];
        const pace = options.clocking === 'twoClocks' && { timings };
        const design = designOf(circuit, { threeValued, ...pace });
        const rows = randomRows(design.layout, seed, CYCLES);
        const start = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const reference = new ReferenceEngine(circuit, design);
        const { cycles, ...expected } = courseOf(reference, start, rows, CYCLES);
        fc.pre(cycles === CYCLES);
        expect(await responseOf(design, start, rows, change)).toEqual(expected);
      },
    ),
    { seed: SEED, numRuns },
  );

describe('a run that begins interpreted and goes on compiled responds as the reference', () => {
  it('with asynchronous set and reset', () => holdsFor({ asynchronous: true }, false, 40));
  it('with latches and divided clocks', () =>
    holdsFor({ clocking: 'divided', latches: true }, false, 30));
  it('with clocks of their own pace', () =>
    holdsFor({ clocking: 'twoClocks', latches: true }, false, 30));
  it('with memories', () => holdsFor({ memories: true }, false, 30));
  it('with three values', () => holdsFor({ unknowns: true, memories: true }, true, 30));
});

describe('StartingEngine', () => {
  const design = designOf(
    smallCircuit({
      inputs: ['clk', 'go'],
      outputs: ['q'],
      gates: { d: 'not q', ring: 'nand go ring' },
      registers: { q: { clock: 'clk', data: 'd' } },
    }),
  );
  const never = new Promise<Engine>(() => {});

  it('wants few cycles at a time until the faster engine has taken over', async () => {
    const next = quick(design);
    const engine = new StartingEngine(quick(design), Promise.resolve(next));
    expect(engine.pieceCycles).toBe(1);
    engine.run(1, new Uint32Array(1), 0, undefined);
    expect(engine.pieceCycles).toBe(2);
    await Promise.resolve();
    expect(engine.pieceCycles).toBe(Number.POSITIVE_INFINITY);
    expect(next.state()[0]).toBe(1);
  });

  it('hands on what makes the faster engine fail', async () => {
    const engine = new StartingEngine(quick(design), Promise.reject(new Error('no room')));
    await Promise.resolve();
    expect(() => engine.run(1, new Uint32Array(1), 0, undefined)).toThrow('no room');
  });

  it('has the faults of the engine at hand', () => {
    const looped = designOf(
      smallCircuit({ inputs: ['go'], outputs: ['ring'], gates: { ring: 'nand go ring' } }),
    );
    const engine = new StartingEngine(quick(looped), never);
    const fault = (): number => {
      try {
        engine.run(3, Uint32Array.of(0, 1, 0), 1, undefined);
      } catch (error) {
        if (error instanceof RunFault) return error.completed;
        throw error;
      }
      return -1;
    };
    expect(fault()).toBe(1);
  });
});
