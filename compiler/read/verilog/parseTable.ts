import { Char } from './characters.js';
import { Keyword } from './keywords.js';
import type { Parser } from './parser.js';
import type { PrimitiveRow } from './syntax.js';
import { Token } from './tokens.js';

const LEVELS = '01x?b';
const EDGES = 'rfpn*';

/** `table` row { row } `endtable`, with the `table` as the current token (clause 8.1.4) */
export function parseRows(p: Parser, inputs: number, sequential: boolean): PrimitiveRow[] {
  const { tokens } = p;
  const rows: PrimitiveRow[] = [];
  tokens.nextSymbol();
  while (tokens.kind === Token.Symbol) {
    const row = readRow(p, inputs, sequential);
    if (row !== undefined) rows.push(row);
  }
  p.expect(Keyword.endtable, "a row of the table or 'endtable'");
  return rows;
}

/** symbols `:` [ state `:` ] output `;` */
function readRow(p: Parser, inputs: number, sequential: boolean): PrimitiveRow | undefined {
  const { tokens } = p;
  const { start } = tokens;
  const fields: string[][] = [[]];
  let fault: string | undefined;
  while (tokens.kind === Token.Symbol && tokens.value !== Char.Semicolon) {
    if (tokens.value === Char.Colon) {
      fields.push([]);
      tokens.nextSymbol();
    } else {
      const symbol = readSymbol(p);
      if (symbol === undefined) fault ??= `${p.found()} is no symbol of a table`;
      fields.at(-1)!.push(symbol ?? '');
      if (symbol === undefined) tokens.nextSymbol();
    }
  }
  const { end } = tokens;
  if (tokens.kind === Token.Symbol) tokens.nextSymbol();
  else fault ??= "the row has no ';'";
  fault ??= faultOf(fields, inputs, sequential);
  if (fault === undefined) {
    const state = sequential ? fields[1]![0] : undefined;
    return { inputs: fields[0]!, state, output: fields.at(-1)![0]!, start, end };
  }
  p.problems.add('syntax-error', fault, start, end);
  return undefined;
}

/** A level, an edge, `-`, or two levels in parentheses; undefined for anything else. */
function readSymbol(p: Parser): string | undefined {
  const { tokens } = p;
  const symbol = letter(p);
  if (symbol !== '(') {
    if (!`${LEVELS}${EDGES}-`.includes(symbol)) return undefined;
    tokens.nextSymbol();
    return symbol;
  }
  let pair = '(';
  for (let i = 0; i < 2; i++) {
    tokens.nextSymbol();
    if (tokens.kind !== Token.Symbol || !LEVELS.includes(letter(p))) return undefined;
    pair += letter(p);
  }
  tokens.nextSymbol();
  if (tokens.kind !== Token.Symbol || letter(p) !== ')') return undefined;
  tokens.nextSymbol();
  return `${pair})`;
}

function letter(p: Parser): string {
  return String.fromCharCode(p.tokens.value).toLowerCase();
}

function faultOf(
  fields: readonly (readonly string[])[],
  inputs: number,
  sequential: boolean,
): string | undefined {
  const wanted = sequential ? 3 : 2;
  if (fields.length !== wanted) {
    return sequential
      ? "a row of a primitive with a reg is 'inputs : state : output ;'"
      : "a row of a primitive without a reg is 'inputs : output ;'";
  }
  const symbols = fields[0]!;
  if (symbols.length !== inputs) {
    return `the row has ${symbols.length} input symbols, but the primitive has ${inputs} inputs`;
  }
  const isLevel = (symbol: string): boolean => LEVELS.includes(symbol);
  const edges = symbols.filter((symbol) => !isLevel(symbol));
  if (symbols.includes('-')) return "'-' stands for no change of the output, not for an input";
  if (edges.length > 0 && !sequential) return 'only a primitive with a reg has edges in its rows';
  if (edges.length > 1) return 'a row has one edge at most';
  const state = fields[1]!;
  if (sequential && (state.length !== 1 || !isLevel(state[0]!))) {
    return 'the state of a row is one of 0 1 x ? b';
  }
  const output = fields.at(-1)!;
  const outputs = sequential ? '01x-' : '01x';
  if (output.length !== 1 || !outputs.includes(output[0]!)) {
    return `the output of a row is one of ${[...outputs].join(' ')}`;
  }
  return undefined;
}
