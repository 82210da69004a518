import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { findClockPorts } from '../../../compiler/circuit/clockPorts.js';
import { type CompileOptions, designOf } from '../../../compiler/compile.js';
import { compileLanes, laneProgramsOf } from '../../../compiler/compileLanes.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { loadBinaryen } from '../../../compiler/emit/emitModel.js';
import { localEmitter, startEmitter } from '../../../compiler/emit/emitter.js';
import { emitLanes } from '../../../compiler/emit/lanes/emitLanes.js';
import type { LaneCount } from '../../../runtime/laneLayout.js';
import { expectLanesAsAlone } from '../../support/lanes.js';
import { designFrom, ownDesign } from '../../support/ownCircuits.js';
import { hasPublishedCircuits, publishedSource } from '../../support/published.js';
import { randomBanks } from '../../support/randomBanks.js';
import { type RandomCircuitOptions, randomCircuit } from '../../support/randomCircuit.js';

const SEED = 20261103;
const CYCLES = 12;

const counts = fc.constantFrom<LaneCount>(32, 64, 128);

function holdsFor(
  options: RandomCircuitOptions,
  numRuns: number,
  compile: (circuit: Circuit) => CompileOptions = () => ({}),
): Promise<void> {
  return fc.assert(
    fc.asyncProperty(randomCircuit(options), counts, fc.nat(1e6), (circuit, lanes, seed) =>
      expectLanesAsAlone(designOf(circuit, compile(circuit)), lanes, { cycles: CYCLES, seed }),
    ),
    { seed: SEED, numRuns },
  );
}

describe('each lane does what the circuit does alone', () => {
  it('with registers on one edge', () => holdsFor({}, 20));
  it('with wide ports and many gates', () =>
    holdsFor({ maxInputs: 8, maxWidth: 40, maxRegisters: 40, maxGates: 300 }, 6));
  it('with set and reset, latches and gated clocks', () =>
    holdsFor({ clocking: 'gated', latches: true, asynchronous: true }, 12));
  it('with combinational loops, of which some never settle', () =>
    holdsFor({ loops: true, latches: true, asynchronous: true, maxGates: 15 }, 8));
  it('with three values', () =>
    holdsFor({ unknowns: true, asynchronous: true }, 12, () => ({ threeValued: true })));
  it('with three values and loops', () =>
    holdsFor({ unknowns: true, loops: true, maxGates: 15 }, 8, () => ({ threeValued: true })));

  it('with banks of registers', () =>
    fc.assert(
      fc.asyncProperty(randomBanks(), counts, fc.boolean(), (circuit, lanes, threeValued) =>
        expectLanesAsAlone(designOf(circuit, { threeValued }), lanes, { cycles: CYCLES, seed: 1 }),
      ),
      { seed: SEED, numRuns: 6 },
    ));

  it('with clocks each at its own pace', () => {
    const timings = [
      { port: 'clk', period: 4, offset: 1 },
      { port: 'clk2', period: 6, offset: 0 },
    ];
    return holdsFor({ clocking: 'twoClocks', loops: true, maxGates: 20 }, 8, (circuit) => {
      const clocks = findClockPorts(circuit).ports.map(({ name }) => name);
      const known = timings.filter(({ port }) => clocks.includes(port));
      return known.length > 0 ? { timings: known } : {};
    });
  });

  it.each([
    ['aes128', 128],
    ['sha256', 64],
    ['uart', 32],
    ['lock', 128],
    ['counter', 64],
  ] as const)('in %s with %i lanes', (name, lanes) =>
    expectLanesAsAlone(ownDesign(name), lanes, {
      cycles: 200,
      seed: 17,
      compared: [0, 21, lanes - 1],
    }),
  );

  it('in aes128 with three values', () => {
    const { circuit } = ownDesign('aes128');
    const design = designOf(circuit, { threeValued: true });
    return expectLanesAsAlone(design, 128, { cycles: 60, seed: 5, compared: [3, 100] });
  });
});

if (!hasPublishedCircuits) console.log('published circuits are not here: no lanes of them');

describe.runIf(hasPublishedCircuits)('each lane of a published circuit', () => {
  it.each(['s1488', 's5378', 's13207.1'])('does in %s what the circuit does alone', (name) =>
    expectLanesAsAlone(designFrom(publishedSource(`${name}.bench`)), 128, {
      cycles: 200,
      seed: 3,
      compared: [1, 126],
    }),
  );
});

describe('emitLanes', () => {
  const design = ownDesign('sha256');

  it('makes a valid module without imports, of many functions', async () => {
    const model = await compileLanes(design, 128);
    const module = await WebAssembly.compile(model.bytes);
    const names = WebAssembly.Module.exports(module).map(({ name }) => name);
    expect(names.sort()).toEqual(['memory', 'run', 'spread']);
    expect(WebAssembly.Module.imports(module)).toEqual([]);
  });

  it('makes equal bytes of equal programs', async () => {
    const wasm = await loadBinaryen();
    const [first, again] = [0, 1].map(() =>
      emitLanes(wasm, laneProgramsOf(design, 128), design.layout, 128),
    );
    expect(again!.bytes).toEqual(first!.bytes);
  });

  it('gives the same model wherever it works', async () => {
    const started = startEmitter();
    const small = ownDesign('counter');
    const [here, there] = await Promise.all(
      [localEmitter(), started].map((emitter) => compileLanes(small, 64, emitter)),
    );
    await started.close();
    expect(there!.bytes).toEqual(here!.bytes);
  });

  it('refuses memories by name', () => {
    const text = `module buffer(input clk, we, input [9:0] at, input [7:0] d, output [7:0] q);
      reg [7:0] words [0:1023];
      assign q = words[at];
      always @(posedge clk) if (we) words[at] <= d;
    endmodule`;
    const buffer = designFrom(new Source('buffer.v', text));
    expect(() => compileLanes(buffer, 128)).toThrow(
      new RangeError('lanes cannot run memories, and the circuit has 1: words'),
    );
  });

  it('refuses other numbers of lanes', () => {
    const lanes = 16 as LaneCount;
    expect(() => compileLanes(design, lanes)).toThrow('lanes are 32, 64, 128, got 16');
  });
});
