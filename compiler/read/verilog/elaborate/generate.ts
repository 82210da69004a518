import type { NameId } from '../../names.js';
import { evaluateConstant } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { GenerateBlock, Item } from '../syntax.js';
import { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { integerConstant, isTrue, numberOf } from './constants.js';
import { OtherName, SymbolKind } from './symbols.js';

type Construct<Kind extends Item['kind']> = Extract<Item, { kind: Kind }>;

/** The constructs that are numbered among their like in a scope (clause 12.4.3). */
export type GenerateItem = Construct<'generateFor' | 'generateIf' | 'generateCase'>;

/** Declares and collects the items of a block; given from outside, as blocks nest. */
export type ExpandItems = (body: ModuleBody, scope: BlockScope, items: readonly Item[]) => void;

// Each turn is a scope with its names; more of them are a loop that does not end.
const MAX_TURNS = 1 << 16;

/** Expands a generate loop into one block per turn, named `name[i]` (clause 12.4.1). */
export function expandFor(
  body: ModuleBody,
  scope: BlockScope,
  item: Construct<'generateFor'>,
  number: number,
  expandItems: ExpandItems,
): void {
  const name = blockName(body, scope, item.body, number);
  const { start, end } = item;
  if (!checkGenvar(body, scope, item) || !body.isFree(scope, name, start, end)) return;
  scope.symbols.add({ name, kind: SymbolKind.Other, value: OtherName.Block, start, end });
  const before = body.workSoFar();
  let value = genvarValue(body, item, evaluateConstant(item.initial, scope));
  for (let turn = 0; value !== undefined; turn++) {
    if (turn === MAX_TURNS) {
      const message = `the generate loop makes more than ${MAX_TURNS} turns; give it an end`;
      body.report('loop-unbounded', message, start, end);
      body.forgetWork(before);
      return;
    }
    const blockId = body.names.internText(`${body.text(name)}[${value}]`);
    const block = new BlockScope(body, scope, body.blocks.length, blockId);
    bindGenvar(block, item.genvar, value, start, end);
    const condition = evaluateConstant(item.condition, block);
    if (condition === undefined || !isTrue(condition)) return;
    if (scope.symbols.find(blockId) >= 0) {
      const message = `${body.text(item.genvar)} is ${value} for the second time; give the loop an end`;
      body.report('loop-unbounded', message, start, end);
      return;
    }
    body.enterBlock(block, start, end);
    expandItems(body, block, item.body.items);
    value = genvarValue(body, item, evaluateConstant(item.step, block));
  }
}

/** Expands the branch of a conditional generate whose condition holds (clause 12.4.2). */
export function expandIf(
  body: ModuleBody,
  scope: BlockScope,
  item: Construct<'generateIf'>,
  number: number,
  expandItems: ExpandItems,
): void {
  const condition = evaluateConstant(item.condition, scope);
  if (condition === undefined) return;
  const branch = isTrue(condition) ? item.whenTrue : item.whenFalse;
  if (branch !== undefined) expandBranch(body, scope, branch, number, expandItems);
}

/** Expands the first branch of a case generate that has a fitting label (clause 12.4.2). */
export function expandCase(
  body: ModuleBody,
  scope: BlockScope,
  item: Construct<'generateCase'>,
  number: number,
  expandItems: ExpandItems,
): void {
  const subject = evaluateConstant(item.subject, scope);
  if (subject === undefined) return;
  let fallback: GenerateBlock | undefined;
  for (const { labels, body: branch } of item.items) {
    if (labels.length === 0) fallback = branch;
    for (const label of labels) {
      const value = evaluateConstant(label, scope);
      if (value === undefined) return;
      if (!sameValue(subject, value)) continue;
      expandBranch(body, scope, branch, number, expandItems);
      return;
    }
  }
  if (fallback !== undefined) expandBranch(body, scope, fallback, number, expandItems);
}

function expandBranch(
  body: ModuleBody,
  scope: BlockScope,
  branch: GenerateBlock,
  number: number,
  expandItems: ExpandItems,
): void {
  const nested = directlyNested(branch);
  if (nested?.kind === 'generateIf') {
    expandIf(body, scope, nested, number, expandItems);
  } else if (nested?.kind === 'generateCase') {
    expandCase(body, scope, nested, number, expandItems);
  } else {
    const { start, end } = branch;
    const name = blockName(body, scope, branch, number);
    if (!body.isFree(scope, name, start, end)) return;
    expandItems(body, body.addBlock(scope, name, start, end), branch.items);
  }
}

// `else if` without `begin` belongs to the construct around it and makes no block of its own
// (clause 12.4.2); a block with `begin` starts before its first item.
function directlyNested(branch: GenerateBlock): Item | undefined {
  const [only, ...more] = branch.items;
  if (branch.name !== 0 || only === undefined || more.length > 0) return undefined;
  return 'start' in only && only.start === branch.start ? only : undefined;
}

/** The block's own name, or `genblkN` with zeros put before N until it is free (12.4.3). */
function blockName(
  body: ModuleBody,
  { symbols }: BlockScope,
  block: GenerateBlock,
  number: number,
): NameId {
  if (block.name !== 0) return block.name;
  for (let digits = `${number}`; ; digits = `0${digits}`) {
    const name = body.names.internText(`genblk${digits}`);
    if (symbols.find(name) < 0) return name;
  }
}

function checkGenvar(
  body: ModuleBody,
  scope: BlockScope,
  { genvar, stepName, start, end }: Construct<'generateFor'>,
): boolean {
  const owner = scope.owner(genvar);
  const kind = owner?.symbols.kind(owner.symbols.find(genvar));
  // Inside the loop of the same genvar it is a parameter.
  if (kind !== SymbolKind.Genvar) {
    const text = body.text(genvar);
    const message =
      kind === SymbolKind.Parameter
        ? `${text} already counts a loop around this one; use another genvar`
        : `${text} counts a generate loop; declare it as genvar`;
    body.report('name-undeclared', message, start, end);
    return false;
  }
  if (stepName === genvar) return true;
  const message = `the loop of ${body.text(genvar)} steps ${body.text(stepName)}; step its own genvar`;
  body.report('loop-unbounded', message, start, end);
  return false;
}

function genvarValue(
  body: ModuleBody,
  { start, end, genvar }: Construct<'generateFor'>,
  constant: Constant | undefined,
): number | undefined {
  const value = constant && numberOf(constant);
  if (constant !== undefined && value === undefined) {
    const message = `genvar ${body.text(genvar)} gets a value with x or beyond 53 bits`;
    body.report('constant-required', message, start, end);
  }
  return value;
}

function bindGenvar(
  { symbols, constants }: BlockScope,
  name: NameId,
  value: number,
  start: number,
  end: number,
): void {
  const index = constants.push(integerConstant(value)) - 1;
  symbols.add({ name, kind: SymbolKind.Parameter, value: index, start, end, msb: 31, lsb: 0 });
}

/** Case equality of two constants, each extended to the wider of the two widths. */
function sameValue(a: Constant, b: Constant): boolean {
  const width = Math.max(a.width, b.width);
  const signed = a.signed && b.signed;
  const extended = (bits: bigint, from: number): bigint =>
    BigInt.asUintN(width, signed ? BigInt.asIntN(from, bits) : bits);
  return (
    extended(a.value, a.width) === extended(b.value, b.width) &&
    extended(a.unknown, a.width) === extended(b.unknown, b.width)
  );
}
