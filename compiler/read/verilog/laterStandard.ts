import { decode } from './decode.js';
import { Keyword } from './keywords.js';
import { Token } from './tokens.js';

const NOT_READ = 'of SystemVerilog, but IEEE 1364-2005 Verilog is read here';

const each = (advice: string, words: string): [string, string][] =>
  words.split(' ').map((word) => [word, advice]);

const OTHERWISE = 'say it in Verilog, or let a synthesis tool write the netlist';

/** Words that the later standard reserves, and what to write in their place. */
const laterWords: ReadonlyMap<string, string> = new Map([
  ...each('write always', 'always_ff'),
  ...each('write always @*', 'always_comb always_latch'),
  ...each('write reg for what procedures assign, and wire for the rest', 'logic bit'),
  ...each('write integer, or reg signed with a range', 'byte int shortint longint'),
  ...each('declare a reg, and give its values names by localparam', 'enum typedef'),
  ...each('declare each field, or the whole as one vector', 'struct union packed'),
  ...each('leave it out', 'unique priority var static'),
  ...each(
    'put parameters and functions into a file for `include',
    'package endpackage import export',
  ),
  ...each('declare its signals as ports', 'interface endinterface modport'),
  ...each('leave it out, or put it between `ifdef and `endif', 'assert assume cover property'),
  ...each('leave it out, or put it between `ifdef and `endif', 'endproperty sequence final bind'),
  ...each('assign the value to the name of the function', 'return'),
  ...each('give the width as a parameter', 'type'),
  ...each('write `timescale', 'timeunit timeprecision'),
  ...each('write a task', 'void'),
  ...each('write a for or while loop', 'do foreach'),
  ...each('name the block and leave it by disable', 'break continue'),
  ...each('write localparam', 'const'),
  ...each('compare with each of the values', 'inside'),
  ...each(OTHERWISE, 'alias chandle class clocking endclass endclocking endprogram extends extern'),
  ...each(OTHERWISE, 'iff new program rand ref shortreal string super this virtual'),
]);

/** `; …` about a word of the later standard, or nothing. */
export function laterWordHint(word: string): string {
  const advice = laterWords.get(word);
  return advice === undefined ? '' : `; '${word}' is a keyword ${NOT_READ}: ${advice}`;
}

/** A message about what is written as the later standard allows it. */
export const laterSyntax = (what: string, advice: string): string =>
  `${what} is a form ${NOT_READ}: ${advice}`;

/** What is around a place where something else was expected. */
interface Around {
  readonly text: Uint8Array;
  readonly before: number;
  readonly found: number;
}

/** `; …` about signs that the later standard allows where they stand, or nothing. */
export function laterSignHint(
  kind: number,
  expected: string,
  { text, before, found }: Around,
): string {
  const next = decode(text, found, Math.min(found + 3, text.length));
  const last = decode(text, Math.max(before - 12, 0), before);
  const hint = (what: string, advice: string): string => `; ${laterSyntax(what, advice)}`;
  if (kind === Token.Star && last.endsWith('.')) {
    return hint("'.*'", 'connect each port by .port(net)');
  }
  const isNext = kind === Token.Comma || kind === Token.RightParen;
  if (isNext && expected.startsWith("'(' and the connection of the port")) {
    return hint('a port without (…)', 'connect it by .port(net)');
  }
  if (next.startsWith('++') || next.startsWith('--')) {
    return hint(`'${next.slice(0, 2)}'`, `write i = i ${next[0]} 1`);
  }
  if (/^(?:[-+*/%&|^]|<<|>>)=/.test(next)) {
    const sign = next.slice(0, next.indexOf('='));
    return hint(`'${sign}='`, `write a = a ${sign} b`);
  }
  if (kind === Token.RightBracket && expected.startsWith("':' between")) {
    return hint('a size alone in brackets', 'write both ends, such as [0:3] for [4]');
  }
  const isSecond = kind === Token.LeftBracket && last.trimEnd().endsWith(']');
  if (isSecond && expected.startsWith('the name')) {
    return hint('a second range in front of a name', 'put it behind the name, or make one range');
  }
  if (kind === Keyword.genvar) return hint('a genvar in a loop', 'declare it in front of the loop');
  if (kind === Token.Colon && /\bend[a-z]*$/.test(last)) {
    return hint('a name behind an end', 'leave it out');
  }
  return '';
}

/** What a quote begins in the later standard, by the character behind it; undefined for others. */
export function laterQuote(character: string): string | undefined {
  if (/^[01xXzZ]$/.test(character)) {
    return laterSyntax(`'${character} of any width`, `write {W{1'b${character}}} with the width W`);
  }
  if (character === '(') return laterSyntax('a cast', 'select bits, or use $signed and $unsigned');
  if (character === '{') {
    return laterSyntax("a list '{ … }", 'assign the elements one by one, or a vector by { … }');
  }
  return undefined;
}
