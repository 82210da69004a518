import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { compile, designOf, packedProgramsOf, programsOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { localEmitter } from '../../compiler/emit/emitter.js';
import { BytecodeEngine } from '../../compiler/interpret/bytecodeEngine.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { type PassSwitches, passNames } from '../../compiler/program/switches.js';
import { WasmEngine } from '../../runtime/wasmEngine.js';
import { courseOf } from '../support/engines.js';
import { designFrom, ownDesign } from '../support/ownCircuits.js';
import { randomBanks } from '../support/randomBanks.js';
import { randomCircuit } from '../support/randomCircuit.js';
import { randomSums } from '../support/randomSums.js';
import { randomWords } from '../support/randomWords.js';
import { randomRows } from '../support/responses.js';

const emitter = localEmitter();
const CYCLES = 40;

const circuits = fc.oneof(
  randomWords(),
  randomBanks(),
  randomSums(),
  randomCircuit({ asynchronous: true, unknowns: true }),
  randomCircuit({ clocking: 'gated', latches: true, asynchronous: true }),
);

/** Any passes left out, and functions of any size. */
const settings: fc.Arbitrary<PassSwitches> = fc
  .record({
    ...Object.fromEntries(passNames.map((name) => [name, fc.boolean()])),
    blockNodes: fc.constantFrom(10, 100, 1200),
  })
  .map((setting) => setting as PassSwitches);

describe('passes left out', () => {
  it('change neither responses nor states', async () => {
    const agrees = fc.asyncProperty(
      circuits,
      settings,
      fc.boolean(),
      fc.boolean(),
      fc.nat(1e6),
      async (circuit, passes, threeValued, hasStart, seed) => {
        const design = designOf(circuit, { threeValued });
        const state = powerUpState(circuit, threeValued ? 'unknown' : 'random', seed);
        const rows = randomRows(design.layout, seed, CYCLES);
        const options = { passes, ...(hasStart && { start: state }) };
        const engine = await WasmEngine.create(await compile(design, emitter, options));
        const bytecode = new BytecodeEngine(programsOf(design, false, passes), design.layout);
        const reference = new ReferenceEngine(circuit, design);
        const expected = courseOf(reference, state, rows, CYCLES);
        expect(courseOf(engine, state, rows, CYCLES)).toEqual(expected);
        expect(courseOf(bytecode, state, rows, CYCLES)).toEqual(expected);
      },
    );
    await fc.assert(agrees, { seed: 17, numRuns: 40 });
  });
});

describe('each switch', () => {
  // Two counters that count the same, a bank with an enable, a bus of exclusive-ors, a sum.
  const design = designFrom(
    new Source(
      'switches.v',
      `module switches(input clk, input en, input s, input [63:0] d, output [63:0] y, output z, output [1:0] w);
        reg [7:0] a, b;
        reg [63:0] held, mixed, total;
        wire p = (s & d[0]) | (~s & d[1]), q = (s & d[0]) | (~s & d[1]);
        wire m = (d[2] & d[3]) | (d[4] & (d[2] | d[3])), n = (d[2] & d[3]) | (d[4] & (d[2] ^ d[3]));
        always @(posedge clk) begin
          a <= a + 1;
          b <= b + 1;
          if (en) held <= d;
          total <= total + held;
          mixed <= (held ^ {mixed[62:0], p}) & ~d;
        end
        assign y = held, z = ^(a & b) ^ q ^ mixed[63] ^ total[63] ^ m ^ n, w = {mixed[1], &d[9:0] | &mixed[9:0]};
      endmodule`,
    ),
  );
  const start = powerUpState(design.circuit, 'zero');

  it('changes what it is named after, and nothing where there is nothing to gain', async () => {
    const bytes = async (passes: PassSwitches): Promise<string> =>
      Buffer.from((await compile(design, emitter, { start, passes })).bytes).toString('hex');
    const whole = await bytes({});
    for (const name of passNames) {
      // What is packed hides what the other passes do, and rewriting finds what others may leave.
      const alone = { packWords: false, rewriteCuts: false };
      const rest =
        name === 'packWords' || name === 'addWords'
          ? {}
          : name === 'rewriteCuts'
            ? { packWords: false }
            : alone;
      const changed = (await bytes({ ...rest, [name]: false })) !== (await bytes(rest));
      // The state is too large for some.
      expect(changed, name).toBe(name !== 'tables' && name !== 'holdStates');
    }
    expect(await bytes({ packWords: true })).toBe(whole);
  });

  it('leaves a small machine without a table', async () => {
    const lock = ownDesign('lock');
    const runsByTable = async (passes: PassSwitches): Promise<boolean> =>
      (await WasmEngine.create(await compile(lock, emitter, { passes }))).runsByTable;
    expect(await runsByTable({})).toBe(true);
    expect(await runsByTable({ tables: false })).toBe(false);
  });

  it('lets graphs grow that are not shared, and keeps every function short', () => {
    const alone = { packWords: false, rewriteCuts: false };
    const operations = (passes: PassSwitches): number =>
      packedProgramsOf(design, start, { ...alone, ...passes }).programs[0]!.op.length;
    expect(operations({ share: false })).toBeGreaterThan(operations({}));
    expect(operations({ recover: false })).toBeGreaterThan(operations({}));
    expect(operations({ mergeRegisters: false })).toBeGreaterThan(operations({}));
    const { blockStart } = packedProgramsOf(design, start, {
      packWords: false,
      choosePolarity: true,
      blockNodes: 50,
    }).programs[0]!;
    // Beside the nodes there are inversions.
    for (const [i, from] of [...blockStart].slice(1).entries()) {
      expect(from - blockStart[i]!).toBeLessThanOrEqual(100);
    }
  });
});
