import fc from 'fast-check';
import { describe, it } from 'vitest';
import type { Circuit } from '../../../compiler/circuit/circuit.js';
import { Diagnostics, headline } from '../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../compiler/diagnostics/source.js';
import { readNetlist } from '../../../compiler/read/readNetlist.js';
import { behaviourOf, differenceOf } from './compare.js';
import type { Design } from './design/model.js';
import { designRecipe } from './design/recipe.js';
import { designOf } from './design/resolve.js';
import { buildDirect } from './direct/buildDirect.js';
import { plain, type SpellingRecipe, spellingRecipe } from './spell/choices.js';
import { type Spelling, spell } from './spell/spell.js';

const seed = 20261364;
const cycles = 12;

/** Reads a spelling that nothing is wrong with. */
function read({ files, included }: Spelling): Circuit {
  const diagnostics = new Diagnostics();
  const readInclude = (path: string): Source | undefined => {
    const text = included.get(path);
    return text === undefined ? undefined : new Source(path, text);
  };
  const sources = files.map(([path, text]) => new Source(path, text));
  const circuit = readNetlist(sources, { readInclude, top: 'top' }, diagnostics);
  if (circuit !== undefined) return circuit;
  throw new Error(diagnostics.list.map(headline).join('\n'));
}

/** Checks that a spelling means what the design says. */
function check(design: Design, recipe: SpellingRecipe, rows: number): void {
  const expected = behaviourOf(buildDirect(design), rows, cycles);
  const spelling = spell(design, recipe);
  const texts = [...spelling.files, ...spelling.included].map(
    ([path, text]) => `--- ${path}\n${text}`,
  );
  try {
    const difference = differenceOf(behaviourOf(read(spelling), rows, cycles), expected);
    if (difference !== undefined) throw new Error(difference);
  } catch (error) {
    throw new Error(`${(error as Error).message}\n${texts.join('\n')}`, { cause: error });
  }
}

describe('a random design', () => {
  it('behaves as when it is built without text, however it is spelled', () => {
    fc.assert(
      fc.property(
        designRecipe,
        fc.array(spellingRecipe, { minLength: 1, maxLength: 2 }),
        fc.nat(),
        (recipe, spellings, rows) => {
          const design = designOf(recipe);
          for (const spelling of [plain, ...spellings]) check(design, spelling, rows);
        },
      ),
      { seed, numRuns: Number(process.env.RUNS ?? 60) },
    );
  });
});
