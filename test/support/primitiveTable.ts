import type { Circuit } from '../../compiler/circuit/circuit.js';
import { Diagnostics } from '../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { readNetlist } from '../../compiler/read/readNetlist.js';

/**
 * Tables of user-defined primitives by the letter of IEEE 1364-2005, clause 8, as far as one input
 * changes at a time: an interpreter that shares nothing with the reader.
 */
export class TableModel {
  readonly inputs: number;
  readonly #rows: readonly Row[];
  readonly #isSequential: boolean;

  /** `text` has the rows of a table, each ended by a semicolon. */
  constructor(text: string, isSequential: boolean) {
    this.#rows = text
      .split(';')
      .map((row) => row.trim())
      .filter((row) => row !== '')
      .map(rowOf);
    this.inputs = this.#rows[0]!.inputs.length;
    this.#isSequential = isSequential;
  }

  /** The output for the levels of a table without state. */
  level(levels: string): string {
    const row = this.#rows.find(({ inputs }) =>
      inputs.every((symbol, i) => levelsOf(symbol).includes(levels[i]!)),
    );
    return row?.output ?? 'x';
  }

  /** The state after the levels have changed in one place. */
  next(before: string, after: string, state: string): string {
    if (!this.#isSequential) return this.level(after);
    const changed = [...after].findIndex((value, i) => value !== before[i]);
    if (changed < 0) return state;
    const fits = ({ inputs, state: states }: Row): boolean =>
      levelsOf(states).includes(state) &&
      inputs.every((symbol, i) =>
        isEdge(symbol)
          ? i === changed && edgesOf(symbol).includes(before[i]! + after[i]!)
          : levelsOf(symbol).includes(after[i]!),
      );
    const level = this.#rows.find((row) => !row.inputs.some(isEdge) && fits(row));
    const output = (level ?? this.#rows.find(fits))?.output ?? 'x';
    return output === '-' ? state : output;
  }
}

interface Row {
  readonly inputs: readonly string[];
  readonly state: string;
  readonly output: string;
}

function rowOf(text: string): Row {
  const parts = text.split(':').map((part) => part.trim());
  return {
    inputs: parts[0]!.match(/\(..\)|\S/g)!,
    state: parts.length > 2 ? parts[1]! : '?',
    output: parts.at(-1)!,
  };
}

const isEdge = (symbol: string): boolean => '(rfpn*'.includes(symbol[0]!);

const levelsOf = (symbol: string): string => ({ '?': '01x', b: '01' })[symbol] ?? symbol;

// Clause 8.1.6, with z read as x.
const letters: Readonly<Record<string, readonly string[]>> = {
  r: ['01'],
  f: ['10'],
  p: ['01', '0x', 'x1'],
  n: ['10', '1x', 'x0'],
  '*': ['01', '0x', '10', '1x', 'x0', 'x1'],
};

const edgesOf = (symbol: string): readonly string[] =>
  letters[symbol] ??
  [...levelsOf(symbol[1]!)].flatMap((from) => [...levelsOf(symbol[2]!)].map((to) => from + to));

/**
 * A netlist with one instance of a primitive; inputs `a`, `b`, … and output `q`. Inputs that
 * `ties` has a level for in place of a `-` are constants and no ports.
 */
export function primitiveNetlist(
  table: string,
  inputs: number,
  isSequential: boolean,
  ties = '',
): string {
  const all = [...'abcdefghijkl'].slice(0, inputs);
  const names = all.join(', ');
  const isFree = (i: number): boolean => (ties[i] ?? '-') === '-';
  const free = all.filter((_, i) => isFree(i)).join(', ');
  const terminals = all.map((name, i) => (isFree(i) ? name : `1'b${ties[i]}`)).join(', ');
  const rows = table.replaceAll(';', ';\n');
  return `primitive p (q, ${names}); output q; ${isSequential ? 'reg q;' : ''} input ${names};
      table ${rows}
      endtable
    endprimitive
    module t (input ${free}, output q); p (q, ${terminals}); endmodule`;
}

/** All words of a length over an alphabet. */
export const wordsOver = (alphabet: string, length: number): string[] =>
  length === 0
    ? ['']
    : wordsOver(alphabet, length - 1).flatMap((word) => [...alphabet].map((last) => word + last));

/** All words that differ from one in one place. */
export const neighbours = (word: string, alphabet: string): string[] =>
  [...word].flatMap((own, i) =>
    [...alphabet]
      .filter((value) => value !== own)
      .map((value) => word.slice(0, i) + value + word.slice(i + 1)),
  );

/** Reads a netlist that may have notes, but neither errors nor warnings. */
export function circuitWithNotes(text: string, path = 't.v'): Circuit {
  const diagnostics = new Diagnostics();
  const circuit = readNetlist([new Source(path, text)], {}, diagnostics);
  const found = diagnostics.list.filter(({ severity }) => severity !== 'note');
  if (circuit === undefined || found.length > 0) throw new Error(found[0]?.message ?? 'no circuit');
  return circuit;
}
