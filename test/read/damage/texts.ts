import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { libraryFiles } from '../../../benchmarks/circuits/cells/libraryFiles.js';
import { circuits } from '../../../benchmarks/circuits/index.js';
import { designRecipe } from '../generated/design/recipe.js';
import { designOf } from '../generated/design/resolve.js';
import { spellingRecipe } from '../generated/spell/choices.js';
import { spell } from '../generated/spell/spell.js';

/** Files that make a design, of which some are to be damaged. */
export interface Texts {
  readonly name: string;
  readonly files: readonly (readonly [path: string, bytes: Uint8Array])[];
  readonly included: ReadonlyMap<string, Uint8Array>;
  readonly top?: string;
}

const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);

const noFiles: ReadonlyMap<string, Uint8Array> = new Map();

/** The project's own circuits, the small ones of them also with the cells of each library. */
export function ownTexts(): Texts[] {
  const plain = ['counter', 'prbs', 'crc32', 'uart', 'lock'].map((name): Texts => {
    const text = bytesOf(textOf(name, {}));
    return { name, files: [[`${name}.v`, text]], included: noFiles };
  });
  const cells = new Map(
    libraryFiles.map(({ name, chunks }) => [name, bytesOf([...chunks()].join(''))]),
  );
  const mapped = bytesOf(textOf('counter', { library: 1 }));
  const libraries = [...cells].filter(([name]) => !/primitives/i.test(name));
  const withCells = libraries.map(([name, text]): Texts => {
    return {
      name,
      files: [
        [name, text],
        ['counter.v', mapped],
      ],
      included: cells,
    };
  });
  return [...plain, ...withCells];
}

function textOf(name: string, parameters: Readonly<Record<string, number>>): string {
  const circuit = circuits.find((each) => each.name === name);
  if (circuit === undefined) throw new RangeError(`there is no circuit ${name}`);
  return [...circuit.write(parameters)].join('');
}

/** Generated designs in one of their spellings each: every construct that the reader knows. */
export function generatedTexts(seed: number, count: number): Texts[] {
  const samples = fc.sample(fc.tuple(designRecipe, spellingRecipe), { seed, numRuns: count });
  return samples.map(([recipe, spelling], i): Texts => {
    const { files, included } = spell(designOf(recipe), spelling);
    return {
      name: `generated ${i}`,
      files: files.map(([path, text]) => [path, bytesOf(text)]),
      included: new Map([...included].map(([path, text]) => [path, bytesOf(text)])),
      top: 'top',
    };
  });
}

/** Small published circuits in both forms. */
export const publishedTexts = (folder: URL): Texts[] =>
  ['s27.bench', 's344.bench', 's1488.bench', 'verilog/s27.v', 'verilog/s344.v'].map((path) => {
    return { name: path, files: [[path, readFileSync(new URL(path, folder))]], included: noFiles };
  });
