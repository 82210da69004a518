import type { NameTable } from '../names.js';
import { builtinGates } from './instances.js';
import { Token } from './tokens.js';

const otherWords = [
  ...['always', 'assign', 'automatic', 'begin', 'case', 'casex', 'casez', 'cell', 'config'],
  ...['deassign', 'default', 'defparam', 'design', 'disable', 'edge', 'else', 'end', 'endcase'],
  ...['endconfig', 'endfunction', 'endgenerate', 'endmodule', 'endprimitive', 'endspecify'],
  ...['endtable', 'endtask', 'event', 'for', 'force', 'forever', 'fork', 'function', 'generate'],
  ...['genvar', 'highz0', 'highz1', 'if', 'ifnone', 'incdir', 'include', 'initial', 'inout'],
  ...['input', 'instance', 'integer', 'join', 'large', 'liblist', 'library', 'localparam'],
  ...['macromodule', 'medium', 'module', 'negedge', 'noshowcancelled', 'output', 'parameter'],
  ...['posedge', 'primitive', 'pull0', 'pull1', 'pulsestyle_ondetect', 'pulsestyle_onevent'],
  ...['real', 'realtime', 'reg', 'release', 'repeat', 'scalared', 'showcancelled', 'signed'],
  ...['small', 'specify', 'specparam', 'strong0', 'strong1', 'supply0', 'supply1', 'table'],
  ...['task', 'time', 'tri', 'tri0', 'tri1', 'triand', 'trior', 'trireg', 'unsigned', 'use'],
  ...['uwire', 'vectored', 'wait', 'wand', 'weak0', 'weak1', 'while', 'wire', 'wor'],
] as const;

/** The reserved words of IEEE 1364-2005, annex B, with the gates first in `builtinGates` order. */
export const keywords = [...builtinGates, ...otherWords] as const;

/** A reserved word. */
export type KeywordText = (typeof keywords)[number];

/** The token kind of each reserved word. */
export const Keyword = Object.fromEntries(
  keywords.map((word, i) => [word, Token.FirstKeyword + i]),
) as Readonly<Record<KeywordText, number>>;

/** Token kind of `builtinGates[0]`; the others follow. */
export const FIRST_GATE: number = Token.FirstKeyword;

/** One past the token kind of the last gate. */
export const END_OF_GATES: number = Token.FirstKeyword + builtinGates.length;

/** Makes the reserved words the names 1, 2, … of an empty table, so that an id tells a keyword. */
export function internKeywords(names: NameTable): void {
  for (const word of keywords) names.internText(word);
}

/** The version named by `begin_keywords` that this reader starts with. */
export const currentVersion = '1364-2005';

const newIn2005 = ['uwire'];
const configWords = ['cell', 'config', 'design', 'endconfig', 'incdir', 'include', 'instance'];
const libraryWords = ['liblist', 'library', 'use'];
const newIn2001 = [
  ...['automatic', 'endgenerate', 'generate', 'genvar', 'localparam', 'noshowcancelled'],
  ...['pulsestyle_ondetect', 'pulsestyle_onevent', 'showcancelled', 'signed', 'unsigned'],
];

/** What each version of `begin_keywords` (clause 19.11) does not reserve. */
const notReserved: ReadonlyMap<string, readonly string[]> = new Map([
  [currentVersion, []],
  ['1364-2001', newIn2005],
  ['1364-2001-noconfig', [...newIn2005, ...configWords, ...libraryWords]],
  ['1364-1995', [...newIn2005, ...configWords, ...libraryWords, ...newIn2001]],
]);

/**
 * Whether the name of each id is a keyword in a version of the language: entry i is 1 where the
 * name i (see `internKeywords`) is reserved. Undefined for an unknown version.
 */
export function reservedWords(version: string): Uint8Array | undefined {
  const free = notReserved.get(version);
  if (free === undefined) return undefined;
  const reserved = new Uint8Array(keywords.length + 1).fill(1, 1);
  for (const word of free) reserved[keywords.indexOf(word as KeywordText) + 1] = 0;
  return reserved;
}

/** Reserved words that a netlist may have used as names before they were reserved, or by mistake. */
export const wordsLikeNames: ReadonlySet<string> = new Set([
  ...configWords,
  ...libraryWords,
  ...['edge', 'event', 'large', 'medium', 'small', 'table', 'uwire'],
]);
