import { describe, expect, it } from 'vitest';
import { isGate } from '../../compiler/circuit/gates.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { readBench } from '../../compiler/read/bench/readBench.js';
import { courseOf, enginesOf } from '../support/engines.js';
import { hasPublishedCircuits, publishedCounts, publishedSource } from '../support/published.js';
import { firstDifference, randomRows } from '../support/responses.js';

const CYCLES = 10_000;

if (!hasPublishedCircuits) {
  console.log('The folder of published benchmark circuits is not there: they are not checked.');
}

describe.runIf(hasPublishedCircuits)('published benchmark circuits', () => {
  const circuitOf = (name: string) => {
    const diagnostics = new Diagnostics();
    const circuit = readBench(publishedSource(`${name}.bench`), diagnostics);
    expect(diagnostics.list).toEqual([]);
    return circuit!;
  };

  for (const [name, [inputs, outputs, registers, gates]] of Object.entries(publishedCounts)) {
    it(`${name} has the published counts`, () => {
      const { layout, circuit } = designOf(circuitOf(name));
      expect(layout.inputs.bits).toBe(inputs);
      expect(layout.outputs.bits).toBe(outputs);
      expect(circuit.registers.count).toBe(registers);
      expect(circuit.kind.filter(isGate).length).toBe(gates);
    });

    it(`${name} runs the same on all engines for ${CYCLES} random cycles`, async () => {
      const design = designOf(circuitOf(name));
      const rows = randomRows(design.layout, 7, CYCLES);
      const state = powerUpState(design.circuit, 'random', 7);
      const { reference, others } = await enginesOf(design);
      const expected = courseOf(reference, state, rows, CYCLES);
      for (const [engineName, engine] of others) {
        const course = courseOf(engine, state, rows, CYCLES);
        const { layout } = design;
        expect(firstDifference(layout, course.response, expected.response), engineName).toBe(
          undefined,
        );
        expect(course.state, engineName).toEqual(expected.state);
      }
    });
  }
});
