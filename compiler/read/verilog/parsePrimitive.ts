import type { NameId } from '../names.js';
import { Keyword } from './keywords.js';
import { parseExpression } from './parseExpression.js';
import type { Parser } from './parser.js';
import { parseRows } from './parseTable.js';
import type { PrimitiveSyntax } from './syntax.js';
import { Token } from './tokens.js';

/** The head of a primitive as it is read. */
interface Head {
  readonly ports: NameId[];
  /** Declared inputs, to check the ports against. */
  readonly inputs: NameId[];
  output: NameId;
  sequential: boolean;
  initial: 0 | 1 | 2 | undefined;
}

/**
 * `primitive` name `(` ports `)` `;` { declaration } [ `initial` … ] `table` rows `endtable`
 * `endprimitive` (clause 8)
 */
export function parsePrimitive(p: Parser): PrimitiveSyntax {
  const { tokens } = p;
  const { start } = tokens;
  p.beginItem(0);
  tokens.next();
  const { start: nameStart } = tokens;
  const name = p.expectName('the name of the primitive');
  const { end: nameEnd } = { end: tokens.lastEnd };
  const head: Head = { ports: [], inputs: [], output: 0, sequential: false, initial: undefined };
  p.expect(Token.LeftParen);
  if (p.is(Keyword.output)) parseDeclaredPorts(p, head);
  else parsePortNames(p, head);
  p.expect(Token.Semicolon);
  while (!p.is(Keyword.table)) parseDeclaration(p, head);
  checkPorts(p, head, nameStart, nameEnd);
  const rows = parseRows(p, head.ports.length - 1, head.sequential);
  p.expect(Keyword.endprimitive);
  const { ports, sequential, initial } = head;
  return { name, nameStart, ports, sequential, initial, rows, start, end: tokens.lastEnd };
}

/** `output` [ `reg` ] name [ `=` value ] { `,` [ `input` ] name } `)` */
function parseDeclaredPorts(p: Parser, head: Head): void {
  p.tokens.next();
  head.sequential = p.accept(Keyword.reg);
  head.output = p.expectName('the name of the output');
  head.ports.push(head.output);
  if (p.accept(Token.Equals)) head.initial = parseInitialValue(p);
  while (p.accept(Token.Comma)) {
    p.accept(Keyword.input);
    const input = p.expectName('the name of an input');
    head.ports.push(input);
    head.inputs.push(input);
  }
  p.expect(Token.RightParen, "',' or ')'");
}

function parsePortNames(p: Parser, head: Head): void {
  do head.ports.push(p.expectName('the name of a port'));
  while (p.accept(Token.Comma));
  p.expect(Token.RightParen, "',' or ')'");
}

/** `output` [ `reg` ] name | `input` names | `reg` name | `initial` name `=` value, and `;` */
function parseDeclaration(p: Parser, head: Head): void {
  const { kind } = p.tokens;
  if (kind === Keyword.output) {
    p.tokens.next();
    if (p.accept(Keyword.reg)) head.sequential = true;
    head.output = p.expectName('the name of the output');
    if (p.accept(Token.Equals)) head.initial = parseInitialValue(p);
  } else if (kind === Keyword.input) {
    p.tokens.next();
    do head.inputs.push(p.expectName('the name of an input'));
    while (p.accept(Token.Comma));
  } else if (kind === Keyword.reg) {
    p.tokens.next();
    p.expectName('the name of the output');
    head.sequential = true;
  } else if (kind === Keyword.initial) {
    p.tokens.next();
    p.expectName('the name of the output');
    p.expect(Token.Equals);
    head.initial = parseInitialValue(p);
  } else p.fail("a declaration or the 'table' of the primitive");
  p.expect(Token.Semicolon);
}

/** `0`, `1`, `1'b0`, `1'b1`, `1'bx`; 2 stands for x */
function parseInitialValue(p: Parser): 0 | 1 | 2 {
  const value = parseExpression(p);
  if (value.kind === 'number' && value.highZ === 0n) {
    if (value.unknown === 1n && value.value === 0n) return 2;
    if (value.unknown === 0n && value.value <= 1n) return value.value === 1n ? 1 : 0;
  }
  return p.failAt("a primitive starts with 0, 1 or 1'bx", value.start, value.end);
}

function checkPorts(p: Parser, head: Head, start: number, end: number): void {
  const { ports, inputs, output } = head;
  if (output !== ports[0]) {
    p.failAt('the first port of a primitive is its one output', start, end);
  }
  const declared = new Set(inputs);
  const missing = ports.slice(1).find((port) => !declared.has(port));
  if (missing !== undefined) {
    p.failAt(`the port '${p.names.text(missing)}' is not declared as an input`, start, end);
  }
  if (ports.length < 2) p.failAt('a primitive has one input at least', start, end);
}
