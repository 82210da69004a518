import type { VcdTokens } from './vcdTokens.js';

/** A variable of a value change dump that may be of interest. */
export interface VcdVariable {
  /** Scopes above it, joined with dots; empty at the top. */
  readonly scope: string;
  /** How many scopes. */
  readonly depth: number;
  /** Without its range, and without the backslash of an escaped identifier. */
  readonly name: string;
  /** Left and right index, or one index twice; undefined where there is none. */
  readonly range: readonly [number, number] | undefined;
  readonly width: number;
  readonly id: string;
}

/** What the declarations of a value change dump tell. */
export interface VcdHeader {
  /** Those whose names were asked for. */
  readonly variables: readonly VcdVariable[];
  /** Femtoseconds of a unit of time; undefined where the file does not say. */
  readonly unit: bigint | undefined;
}

/** Femtoseconds of the units of time. */
export const timeUnits: Readonly<Record<string, bigint>> = {
  s: 10n ** 15n,
  ms: 10n ** 12n,
  us: 10n ** 9n,
  ns: 10n ** 6n,
  ps: 10n ** 3n,
  fs: 1n,
};

/**
 * Reads the declarations, up to `$enddefinitions $end` (IEEE 1364-2005, 18.2.1).
 *
 * Of the variables only those are kept that `wants` asks for, by name without range. Throws
 * `TableError` for what is no such file.
 */
export async function readVcdHeader(
  tokens: VcdTokens,
  wants: (name: string) => boolean,
): Promise<VcdHeader> {
  const variables: VcdVariable[] = [];
  const scopes: string[] = [];
  let unit: bigint | undefined;
  for (;;) {
    if (!(await tokens.await())) throw tokens.error('the declarations are not closed');
    const keyword = tokens.text();
    if (!keyword.startsWith('$')) throw tokens.error(`expected a declaration, got ${keyword}`);
    const words = await wordsToEnd(tokens, keyword);
    if (keyword === '$enddefinitions') return { variables, unit };
    if (keyword === '$scope') scopes.push((words[1] ?? '').replace(/^\\/, ''));
    else if (keyword === '$upscope') scopes.pop();
    else if (keyword === '$timescale') unit = unitOf(tokens, words.join(''));
    else if (keyword === '$var') {
      const variable = variableOf(tokens, words, scopes);
      if (wants(variable.name) || wants(referenceOf(words))) variables.push(variable);
    }
  }
}

// $keyword words $end
async function wordsToEnd(tokens: VcdTokens, keyword: string): Promise<string[]> {
  const words: string[] = [];
  for (;;) {
    if (!(await tokens.await())) throw tokens.error(`${keyword} is not closed by $end`);
    const word = tokens.text();
    if (word === '$end') return words;
    // Comments may be long, and nobody asks for them.
    if (keyword !== '$comment') words.push(word);
  }
}

const referenceOf = (words: readonly string[]): string =>
  words.slice(3).join('').replace(/^\\/, '');

// $var type size identifier_code reference $end, the reference with or without [index] or [l:r]
function variableOf(
  tokens: VcdTokens,
  words: readonly string[],
  scopes: readonly string[],
): VcdVariable {
  const [, size, id] = words;
  const width = Number(size);
  const reference = referenceOf(words);
  if (id === undefined || reference === '' || !Number.isSafeInteger(width) || width < 1) {
    throw tokens.error('a variable has a type, a size, a code and a name');
  }
  const place = { scope: scopes.join('.'), depth: scopes.length, width, id };
  const [, name, left, right = left] = /^(.+?)\[(-?\d+)(?::(-?\d+))?\]$/.exec(reference) ?? [];
  if (name === undefined) return { ...place, name: reference, range: undefined };
  return { ...place, name, range: [Number(left), Number(right)] };
}

function unitOf(tokens: VcdTokens, text: string): bigint {
  const [, number, unit] = /^(1|10|100)(s|ms|us|ns|ps|fs)$/.exec(text) ?? [];
  if (number === undefined) throw tokens.error(`no timescale: ${text}; expected such as 10 ns`);
  return BigInt(number) * timeUnits[unit!]!;
}
