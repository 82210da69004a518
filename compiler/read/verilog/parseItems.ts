import { END_OF_GATES, FIRST_GATE, Keyword } from './keywords.js';
import {
  directionKinds,
  netKinds,
  parseDeclaration,
  parseParameters,
  skipSpecparam,
  variableKinds,
} from './parseDeclarations.js';
import { parseOptionalStrength, skipDelay } from './parseDelays.js';
import { parseExpression, parseMinTypMax, parseReference } from './parseExpression.js';
import {
  parseGenerateBlock,
  parseGenerateCase,
  parseGenerateFor,
  parseGenerateIf,
  parseGenerateRegion,
} from './parseGenerate.js';
import { parseGateInstances, parseModuleInstances } from './parseInstances.js';
import { parseFunction, parseTask } from './parseRoutine.js';
import type { Parser } from './parser.js';
import { parseTarget } from './parseSimpleStatement.js';
import { moduleEnds, parseSpecify } from './parseSpecify.js';
import { parseStatement } from './parseStatement.js';
import type { GenerateBlock, Item } from './syntax.js';
import { Token } from './tokens.js';

type ItemParser = (p: Parser, items: Item[]) => void;

/** Kinds where reading goes on after an item that failed. */
const itemStops: ReadonlySet<number> = new Set([
  ...[Keyword.endmodule, Keyword.module, Keyword.macromodule, Keyword.primitive, Keyword.end],
  ...[Keyword.endgenerate, Keyword.always, Keyword.initial, Keyword.function, Keyword.task],
  ...[Keyword.generate, Keyword.specify],
]);

const itemParsers: (ItemParser | undefined)[] = tableOfItems();

/** Reads items up to `last` or the end of what is around them, which is not read. */
export function parseItems(p: Parser, items: Item[], last: number): void {
  const { tokens } = p;
  const isEnd = (kind: number): boolean =>
    kind === last || moduleEnds.has(kind) || (kind === Keyword.endgenerate && last === Keyword.end);
  // One attempt goes over all items up to the next fault: one for each takes too long.
  const parseMany = (): void => {
    while (!isEnd(tokens.kind)) parseItem(p, items);
  };
  while (!isEnd(tokens.kind) && !p.problems.areTooMany) {
    p.attempt(parseMany, itemStops);
    if (!isEnd(tokens.kind) && isStrayEnd(tokens.kind)) tokens.next();
  }
}

function isStrayEnd(kind: number): boolean {
  return kind === Keyword.end || kind === Keyword.endgenerate;
}

function parseItem(p: Parser, items: Item[]): void {
  const { kind } = p.tokens;
  const parse = itemParsers[kind];
  if (kind !== Token.Identifier) p.beginItem(0);
  if (parse === undefined) p.fail("a declaration, an instance or another item, or 'endmodule'");
  parse(p, items);
}

function parseBlock(p: Parser): GenerateBlock {
  return parseGenerateBlock(p, parseItem, parseItems);
}

function tableOfItems(): (ItemParser | undefined)[] {
  const table = new Array<ItemParser | undefined>(256).fill(undefined);
  table[Token.Identifier] = parseModuleInstances;
  table[Token.Semicolon] = (p) => p.tokens.next();
  for (let kind = FIRST_GATE; kind < END_OF_GATES; kind++) table[kind] = parseGateInstances;
  for (const kinds of [netKinds, variableKinds, directionKinds]) {
    for (const kind of kinds.keys()) table[kind] = parseDeclaration;
  }
  table[Keyword.parameter] = parseParameters;
  table[Keyword.localparam] = parseParameters;
  table[Keyword.specparam] = skipSpecparam;
  table[Keyword.assign] = parseAssigns;
  table[Keyword.always] = (p, items) => parseProcess(p, items, 'always');
  table[Keyword.initial] = (p, items) => parseProcess(p, items, 'initial');
  table[Keyword.function] = parseFunction;
  table[Keyword.task] = parseTask;
  table[Keyword.defparam] = parseDefparams;
  table[Keyword.specify] = parseSpecify;
  table[Keyword.generate] = (p, items) => parseGenerateRegion(p, items, parseItems);
  table[Keyword.for] = (p, items) => parseGenerateFor(p, items, parseBlock);
  table[Keyword.if] = (p, items) => parseGenerateIf(p, items, parseBlock);
  table[Keyword.case] = (p, items) => parseGenerateCase(p, items, parseBlock);
  table[Keyword.begin] = (p, items) => {
    const body = parseBlock(p);
    items.push({ kind: 'generateBlock', body, start: body.start, end: body.end });
  };
  return table;
}

/** `assign` [ strength ] [ delay ] target `=` value { `,` target `=` value } `;` */
function parseAssigns(p: Parser, items: Item[]): void {
  p.tokens.next();
  const strength = parseOptionalStrength(p);
  skipDelay(p);
  do {
    const target = parseTarget(p);
    p.expect(Token.Equals, "'=' and the value of the assignment");
    const value = parseExpression(p);
    items.push({ kind: 'assign', target, value, strength, start: target.start, end: value.end });
  } while (p.accept(Token.Comma));
  p.expect(Token.Semicolon, "';' after the assignment");
}

function parseProcess(p: Parser, items: Item[], kind: 'always' | 'initial'): void {
  const { start } = p.tokens;
  p.tokens.next();
  const body = parseStatement(p);
  items.push({ kind, body, start, end: p.tokens.lastEnd });
}

/** `defparam` path `=` value { `,` path `=` value } `;` */
function parseDefparams(p: Parser, items: Item[]): void {
  p.tokens.next();
  do {
    const { start } = p.tokens;
    const reference = parseReference(p);
    if (reference.kind !== 'name') p.fail('the name of a parameter');
    p.expect(Token.Equals, "'=' and the value of the parameter");
    const value = parseMinTypMax(p);
    const { path, indices } = reference;
    const place = { start, end: value.end };
    items.push({ kind: 'defparam', path, ...(indices && { indices }), value, ...place });
  } while (p.accept(Token.Comma));
  p.expect(Token.Semicolon);
}
