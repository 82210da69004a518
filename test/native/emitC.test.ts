import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { type Circuit, Edge, Priority } from '../../compiler/circuit/circuit.js';
import { GateKind } from '../../compiler/circuit/gates.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { ReferenceEngine } from '../../compiler/interpret/reference/referenceEngine.js';
import { vectorWords } from '../../compiler/native/cWords.js';
import { emitC } from '../../compiler/native/emitC.js';
import { findCompiler } from '../../compiler/native/findCompiler.js';
import { obstacleToOneStep } from '../../compiler/native/oneStep.js';
import { NativeProgram } from '../../compiler/native/runC.js';
import { LaneRows } from '../../runtime/laneRows.js';
import { type RandomCircuitOptions, randomCircuit } from '../support/randomCircuit.js';
import { firstDifference, randomRows, responseOf } from '../support/responses.js';
import { smallCircuit } from '../support/smallCircuit.js';

const SEED = 20260202;
const CYCLES = 100;

const compiler = findCompiler();
const command = 'command' in compiler ? compiler.command : [];
if ('missing' in compiler) console.log(`C is emitted but not compiled here: ${compiler.missing}`);

/** Compiles and runs the C of a circuit, and expects of it what the reference interpreter gives. */
async function expectAgreement(circuit: Circuit, seed: number): Promise<void> {
  const design = designOf(circuit);
  const state = powerUpState(circuit, 'random', seed);
  const emitted = emitC(design, state);
  if ('obstacle' in emitted) throw new Error(emitted.obstacle);
  if (command.length === 0) return;
  const stimulus = randomRows(design.layout, seed, CYCLES);
  const flags = ['-Wall', '-Wextra', '-Werror'];
  const rows = { stimulus, count: CYCLES };
  const program = await NativeProgram.build(emitted.text, command, rows, flags);
  try {
    const reference = new ReferenceEngine(circuit, design);
    reference.reset(state);
    const expected = responseOf(reference, CYCLES, stimulus);
    expect(firstDifference(design.layout, await program.respond(), expected)).toBeUndefined();
    expect(await program.time(2 * CYCLES)).toBeGreaterThan(0);
  } finally {
    program.close();
  }
}

/** The same for 128 sequences in vectors, each of which must do what it does alone. */
async function expectVectorsAgree(circuit: Circuit, seed: number): Promise<void> {
  const design = designOf(circuit);
  const { inputs, outputs } = design.layout;
  const state = powerUpState(circuit, 'random', seed);
  const emitted = emitC(design, state, vectorWords);
  if ('obstacle' in emitted) throw new Error(emitted.obstacle);
  if (command.length === 0) return;
  const stimuli = Array.from({ length: 128 }, (_, i) => randomRows(design.layout, seed + i, 20));
  const stimulus = new LaneRows(inputs, false, 128).pack(stimuli, 20);
  const flags = ['-Wall', '-Wextra', '-Werror'];
  const program = await NativeProgram.build(emitted.text, command, { stimulus, count: 20 }, flags);
  try {
    const reference = new ReferenceEngine(circuit, design);
    const responses = new LaneRows(outputs, false, 128).unpackAll(await program.respond(), 20);
    for (const lane of [0, 31, 32, 127]) {
      reference.reset(state);
      const expected = responseOf(reference, 20, stimuli[lane]!);
      expect(firstDifference(design.layout, responses[lane]!, expected)).toBeUndefined();
    }
  } finally {
    program.close();
  }
}

const isOneStep = (circuit: Circuit) => obstacleToOneStep(designOf(circuit)) === undefined;

const holdsFor = (options: RandomCircuitOptions, numRuns: number) =>
  fc.assert(
    fc.asyncProperty(randomCircuit(options).filter(isOneStep), fc.nat(1e6), expectAgreement),
    {
      seed: SEED,
      numRuns,
    },
  );

describe('emitted C compiles without warnings and agrees with the reference', () => {
  it('on random circuits', () => holdsFor({}, 8));

  it('with asynchronous set and reset', () => holdsFor({ asynchronous: true }, 8));

  it('in vectors of 128 sequences', () =>
    fc.assert(
      fc.asyncProperty(
        randomCircuit({ asynchronous: true, unknowns: true }).filter(isOneStep),
        fc.nat(1e6),
        expectVectorsAgree,
      ),
      { seed: SEED, numRuns: 4 },
    ));

  it('with wide ports and constants x', () =>
    holdsFor({ maxWidth: 40, maxRegisters: 40, maxGates: 200, unknowns: true }, 4));

  it('where the clock is read as data', async () => {
    const circuit = smallCircuit({
      inputs: ['clk', 'd'],
      outputs: ['level', 'q'],
      registers: { q: { clock: 'clk', data: 'x', edge: Edge.Falling } },
      gates: { level: 'buf clk', x: 'xor clk d' },
    });
    await expectAgreement(circuit, 1);
  });

  it('where set and reset meet', async () => {
    const pins = { clock: 'clk', data: 'd', set: 's', reset: 'r' };
    const circuit = smallCircuit({
      inputs: ['clk', 'd', 's', 'r'],
      outputs: ['p', 'q', 'u'],
      registers: {
        p: { ...pins, priority: Priority.SetWins },
        q: { ...pins, priority: Priority.ResetWins },
        u: { ...pins, priority: Priority.Unknown },
      },
    });
    await expectAgreement(circuit, 2);
  });

  it('without inputs, outputs or registers', async () => {
    await expectAgreement(smallCircuit({ inputs: [], outputs: ['y'], gates: { y: 'one' } }), 3);
    await expectAgreement(smallCircuit({ inputs: ['a'], outputs: [] }), 4);
  });

  it('whatever the nets are called', () => expectAgreement(oddlyNamed('a*/ "\\\n/* é ??/'), 5));
});

describe('emitted C', () => {
  it('is refused to a circuit with a loop of gates', () => {
    const circuit = smallCircuit({
      inputs: ['a'],
      outputs: ['y'],
      gates: { y: 'nand a x', x: 'nand a y' },
    });
    expect(emitC(designOf(circuit), new Uint8Array(0))).toEqual({
      obstacle: 'the logic has a loop',
    });
  });

  it('is refused where a cycle is more than one step', () => {
    const circuit = smallCircuit({
      inputs: ['clk', 'd'],
      outputs: ['q'],
      latches: { q: { enable: 'clk', data: 'd' } },
    });
    expect(emitC(designOf(circuit), new Uint8Array(1))).toEqual({
      obstacle: 'there are latches: q',
    });
  });
});

/** An inverter whose input has the given name. */
function oddlyNamed(name: string): Circuit {
  const builder = new CircuitBuilder();
  const a = builder.net();
  builder.input(name, [a]);
  builder.output('y', [builder.gate(GateKind.Not, [a])]);
  const signal = { name, msb: 0, lsb: 0, isVector: false, offset: 0, width: 1 };
  const module = builder.hierarchy.addModule({ name: 'odd', signals: [signal], bits: 1 });
  builder.hierarchy.addScope('odd', 0, module, [a]);
  return builder.finish('odd');
}
