import fc from 'fast-check';
import { expect } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import {
  circuitWithNotes,
  neighbours,
  primitiveNetlist,
  TableModel,
  wordsOver,
} from '../support/primitiveTable.js';
import { play } from '../support/rows.js';
import { onEachEngine } from './courses.js';

const levelSymbol = fc.constantFrom('0', '1', 'x', '?', 'b', '?');
const edgeSymbol = fc.constantFrom('r', 'f', 'p', 'n', '*', '(x1)', '(?0)', '(??)', '(1x)', '(bx)');
export const inputCount = fc.integer({ min: 1, max: 3 });

/** Random rows for some inputs, with an edge in some of them where there is a state. */
export function randomTable(inputs: number, isSequential: boolean): fc.Arbitrary<string> {
  const row = fc.record({
    levels: fc.array(levelSymbol, { minLength: inputs, maxLength: inputs }),
    edge: fc.option(fc.record({ place: fc.nat(inputs - 1), symbol: edgeSymbol })),
    state: fc.constantFrom('?', '?', '0', '1', 'x', 'b'),
    output: fc.constantFrom('0', '1', 'x', ...(isSequential ? ['-'] : [])),
  });
  const text = row.map(({ levels, edge, state, output }) => {
    if (!isSequential) return `${levels.join(' ')} : ${output};`;
    const symbols = levels.map((level, i) => (i === edge?.place ? edge.symbol : level));
    return `${symbols.join(' ')} : ${state} : ${output};`;
  });
  return fc.array(text, { minLength: 1, maxLength: 9, size: 'max' }).map((rows) => rows.join(' '));
}

/** All changes of one input from all levels, or every n-th of them where they are many. */
function changesOver(alphabet: string, inputs: number): [before: string, after: string][] {
  const all = wordsOver(alphabet, inputs).flatMap((before) =>
    neighbours(before, alphabet).map((after): [string, string] => [before, after]),
  );
  const step = Math.ceil(all.length / 400) | 1;
  return all.filter((_, i) => i % step === 0);
}

/** All inputs of a table: its free ones, and those that `ties` has a level for in place of a `-`. */
export const tiedTogether = (free: string, ties: string): string => {
  const values = [...free];
  return ties === '' ? free : [...ties].map((tie) => (tie === '-' ? values.shift() : tie)).join('');
};

const freeInputs = (model: TableModel, ties: string): number =>
  ties === '' ? model.inputs : [...ties].filter((tie) => tie === '-').length;

/**
 * Expects of every engine, from every state, what the table says of every single change; inputs
 * that `ties` has a level for are tied to it.
 */
export async function expectTable(table: string, threeValued: boolean, ties = ''): Promise<void> {
  const model = new TableModel(table, true);
  const full = (free: string): string => tiedTogether(free, ties);
  // No clocks of their own: every input is a column.
  const circuit = circuitWithNotes(primitiveNetlist(table, model.inputs, true, ties));
  const design = designOf(circuit, { threeValued, clocks: [] });
  const alphabet = threeValued ? '01x' : '01';
  const settled = (value: string): string => (threeValued ? value : value.replace('x', '0'));
  const changes = changesOver(alphabet, freeInputs(model, ties));
  await onEachEngine(design, threeValued ? 'unknown' : 'zero', (engine, name) => {
    for (const [before, after] of changes) {
      for (const state of alphabet) {
        engine.reset(Uint8Array.of(state === 'x' ? 2 : Number(state)));
        const [first, second] = play(engine, [before, after]) as [string, string];
        const expected = settled(model.next(full(before), full(after), first));
        expect(`${before} ${first} ${after} ${second}`, name).toBe(
          `${before} ${first} ${after} ${expected}`,
        );
        if (first !== state) {
          const next = (from: string): string =>
            settled(model.next(full(from), full(before), state));
          expectGiven(next, before, threeValued, first);
        }
      }
    }
  });
}

/** What levels make of a state at power-up, they make of it whichever input brings them about. */
function expectGiven(
  next: (before: string) => string,
  levels: string,
  threeValued: boolean,
  given: string,
): void {
  for (const before of neighbours(levels, threeValued ? '01x' : '01')) {
    expect(next(before)).toBe(given);
  }
}

/**
 * Whether a change that only ever gives x is among those of a table: two-valued runs take it for
 * none, see the README.
 */
export function tellsViolations(table: string, ties = ''): boolean {
  const model = new TableModel(table, true);
  const count = freeInputs(model, ties);
  const words = wordsOver('01', count);
  const full = (free: string): string => tiedTogether(free, ties);
  return Array.from({ length: count }, (_, input) =>
    words.every((before) => {
      const after = neighbours(before, '01').find((word) => word[input] !== before[input])!;
      return [...'01'].every((state) => model.next(full(before), full(after), state) === 'x');
    }),
  ).includes(true);
}
