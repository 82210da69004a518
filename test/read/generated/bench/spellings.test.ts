import fc from 'fast-check';
import { describe, it } from 'vitest';
import { Diagnostics, headline } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../../compiler/read/readNetlist.js';
import { behaviourOf, differenceOf } from '../compare.js';
import { plain, spellingRecipe } from '../spell/choices.js';
import { benchRecipe, buildBench } from './recipe.js';
import { spellBench } from './spell.js';

const cycles = 20;

describe("a random circuit in the ISCAS'89 text form", () => {
  it('behaves as when it is built without text, however it is spelled', () => {
    fc.assert(
      fc.property(benchRecipe, spellingRecipe, fc.nat(), (recipe, spelling, rows) => {
        const expected = behaviourOf(buildBench(recipe), rows, cycles);
        for (const text of [plain, spelling].map((each) => spellBench(recipe, each))) {
          const diagnostics = new Diagnostics();
          const circuit = readNetlist([new Source('c.bench', text)], {}, diagnostics);
          const difference =
            circuit === undefined
              ? diagnostics.list.map(headline).join('\n')
              : differenceOf(behaviourOf(circuit, rows, cycles), expected);
          if (difference !== undefined) throw new Error(`${difference}\n${text}`);
        }
      }),
      { seed: 20261989, numRuns: Number(process.env.RUNS ?? 300) },
    );
  });
});
