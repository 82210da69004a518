import type { LibertyStateTable } from './cell.js';
import type { LibertyText } from './syntax.js';

/** What a row asks of an input. */
type InputSymbol = 'L' | 'H' | '-' | 'R' | 'F' | '~R' | '~F';

/** What a row gives a node: a value, no change, unknown, or nothing (`-`). */
export type NextSymbol = 'L' | 'H' | 'N' | 'X' | '-';

/** A row without alternatives; the columns are in the order of the table's header. */
export interface StateRow {
  readonly inputs: readonly InputSymbol[];
  readonly current: readonly ('L' | 'H' | '-')[];
  readonly next: readonly NextSymbol[];
}

/** Why a text is no table, and the characters where that shows. */
export interface TableFault {
  readonly message: string;
  readonly start: number;
  readonly end: number;
}

const inputSymbols = new Set(['L', 'H', '-', 'R', 'F', '~R', '~F', 'L/H', 'H/L']);
const currentSymbols = new Set(['L', 'H', '-', 'L/H', 'H/L']);
const nextSymbols = new Set(['L', 'H', '-', 'N', 'X', 'L/H', 'H/L']);

const sections = [
  { what: 'an input', symbols: inputSymbols },
  { what: 'a current state', symbols: currentSymbols },
  { what: 'a next state', symbols: nextSymbols },
] as const;

/**
 * Reads the rows of a state table: `inputs : current states : next states`, separated by commas.
 *
 * `L/H` (`H/L`) makes two rows, the first for its first letter: `L/H : … : H/L` inverts. Where no
 * next state has such a pair, one among the inputs means either level.
 */
export function parseStateTable(
  { inputs, nodes }: LibertyStateTable,
  { text }: LibertyText,
): readonly StateRow[] | TableFault {
  const rows: StateRow[] = [];
  let start = 0;
  for (const line of text.split(',')) {
    const end = start + line.length;
    const words = wordsIn(line, start);
    if (words.length > 0) {
      const row = parseRow(words, [inputs.length, nodes.length, nodes.length]);
      if ('message' in row) return row;
      rows.push(...alternatives(row));
    }
    start = end + 1;
  }
  return rows.length > 0 ? rows : { message: 'the table has no rows', start: 0, end: text.length };
}

interface Word {
  readonly text: string;
  readonly start: number;
}

/** The words of a row, `:` being one each. */
function wordsIn(line: string, offset: number): Word[] {
  return [...line.matchAll(/:|[^\s:\\]+/g)].map((match) => ({
    text: match[0].toUpperCase(),
    start: offset + match.index,
  }));
}

function parseRow(words: readonly Word[], counts: readonly number[]): string[][] | TableFault {
  const row: string[][] = [[], [], []];
  let section = 0;
  for (const { text, start } of words) {
    const end = start + text.length;
    if (text === ':') {
      if (++section > 2) return { message: "a row has two ':', got a third", start, end };
      continue;
    }
    const { what, symbols } = sections[section]!;
    if (!symbols.has(text)) {
      const list = [...symbols].join(' ');
      return { message: `${what} is one of ${list}, got ${text}`, start, end };
    }
    row[section]!.push(text);
  }
  for (const [index, { what }] of sections.entries()) {
    const got = row[index]!.length;
    if (got === counts[index]) continue;
    const [first] = words;
    const last = words.at(-1)!;
    const message = `the row has ${got} of ${what}, the header says ${counts[index]}`;
    return { message, start: first!.start, end: last.start + last.text.length };
  }
  return row;
}

function alternatives(row: readonly string[][]): StateRow[] {
  const isPaired = row[2]!.some((symbol) => symbol.includes('/'));
  const chosen = (index: number) =>
    row.map((symbols) => symbols.map((symbol) => (symbol.includes('/') ? symbol[index] : symbol)));
  const made = isPaired
    ? [chosen(0), chosen(2)]
    : [row.map((symbols) => symbols.map((symbol) => (symbol.includes('/') ? '-' : symbol)))];
  return made.map(([inputs, current, next]) => ({ inputs, current, next }) as unknown as StateRow);
}
