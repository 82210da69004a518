import { describe, expect, it } from 'vitest';
import { circuits } from '../../benchmarks/circuits/index.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { courseOf, enginesOf } from '../support/engines.js';
import { ownDesign } from '../support/ownCircuits.js';
import { firstDifference, randomRows } from '../support/responses.js';

const CYCLES = 10_000;

describe("the project's own circuits", () => {
  it.each(circuits.map(({ name }) => name))(
    `%s runs the same on all engines for ${CYCLES} random cycles`,
    async (name) => {
      const design = ownDesign(name, name === 'aes128' ? { cores: 2 } : {});
      const rows = randomRows(design.layout, 29, CYCLES);
      const state = powerUpState(design.circuit, 'random', 29);
      const { reference, others } = await enginesOf(design);
      const expected = courseOf(reference, state, rows, CYCLES);
      expect(expected.cycles).toBe(CYCLES);
      for (const [engineName, engine] of others) {
        const course = courseOf(engine, state, rows, CYCLES);
        const difference = firstDifference(design.layout, course.response, expected.response);
        expect(difference, engineName).toBe(undefined);
        expect(course.state, engineName).toEqual(expected.state);
      }
    },
  );
});
