import type { Item, Statement } from '../syntax.js';
import type { BlockScope } from './blockScope.js';
import type { ModuleBody } from './body.js';
import { declare } from './declarations.js';
import {
  type ExpandItems,
  expandCase,
  expandFor,
  expandIf,
  type GenerateItem,
} from './generate.js';
import { noOverrides, type Overrides } from './overrides.js';
import { bindParameters } from './parameters.js';
import { SymbolKind } from './symbols.js';

/** For so many names room is made at once. */
const MANY = 10_000;

/**
 * Declares everything that stands in a module, and hands the rest of its items to the lists of
 * work in `body`, generate constructs expanded.
 */
export function declareModule(body: ModuleBody, overrides: Overrides): void {
  declareItems(body, body.root, body.module.items, overrides);
}

function declareItems(
  body: ModuleBody,
  scope: BlockScope,
  items: readonly Item[],
  overrides: Overrides,
): void {
  declareNames(body, scope, items, overrides);
  let constructs = 0;
  const collect = (some: readonly Item[]): void => {
    for (const item of some) {
      if (isGenerate(item)) {
        expand(body, scope, item, ++constructs);
      } else if (item.kind !== 'generateBlock') {
        collectItem(body, scope, item);
      } else if (item.body.name !== 0) {
        expandBlock(body, scope, item.body.name, item.body.items, item);
      } else {
        // `begin … end` alone, as the standard of 2001 has it, makes no scope.
        declareNames(body, scope, item.body.items, noOverrides);
        collect(item.body.items);
      }
    }
  };
  collect(items);
}

// Routines and parameters come first: whatever their place, ranges and conditions may use them.
function declareNames(
  body: ModuleBody,
  scope: BlockScope,
  items: readonly Item[],
  overrides: Overrides,
): void {
  const { pending } = scope;
  scope.pending = items;
  bindRoutines(body, scope, items);
  bindParameters(body, scope, items, overrides);
  reserve(body, scope, items);
  for (const item of items) if (item.kind === 'declaration') declare(body, scope, item);
  scope.pending = pending;
}

/** Makes room for the names of a flat netlist, of which there may be a million. */
function reserve(body: ModuleBody, scope: BlockScope, items: readonly Item[]): void {
  let nets = 0;
  let instances = 0;
  for (const item of items) {
    if (item.kind === 'declaration') nets += item.names.length;
    else if (item.kind === 'instances') instances += item.count;
  }
  if (nets + instances < MANY) return;
  scope.symbols.reserve(nets + instances, body.names.count);
  // Some of them have several bits.
  body.builder.reserve(body.builder.netCount + Math.ceil(1.25 * nets));
}

const expandItems: ExpandItems = (body, scope, items) => {
  declareItems(body, scope, items, noOverrides);
};

const isGenerate = (item: Item): item is GenerateItem =>
  item.kind === 'generateFor' || item.kind === 'generateIf' || item.kind === 'generateCase';

function expand(body: ModuleBody, scope: BlockScope, item: GenerateItem, number: number): void {
  body.budget.enter(item, 0);
  if (item.kind === 'generateFor') expandFor(body, scope, item, number, expandItems);
  else if (item.kind === 'generateIf') expandIf(body, scope, item, number, expandItems);
  else expandCase(body, scope, item, number, expandItems);
  body.budget.leave();
}

function expandBlock(
  body: ModuleBody,
  scope: BlockScope,
  name: number,
  items: readonly Item[],
  { start, end }: { readonly start: number; readonly end: number },
): void {
  if (!body.isFree(scope, name, start, end)) return;
  expandItems(body, body.addBlock(scope, name, start, end), items);
}

function bindRoutines(body: ModuleBody, scope: BlockScope, items: readonly Item[]): void {
  for (const item of items) {
    if (item.kind !== 'function' && item.kind !== 'task') continue;
    const { name, start, end } = item;
    if (!body.isFree(scope, name, start, end)) continue;
    const value = scope.routines.push(item) - 1;
    scope.symbols.add({ name, kind: SymbolKind.Routine, value, start, end });
  }
}

function collectItem(body: ModuleBody, scope: BlockScope, item: Item): void {
  switch (item.kind) {
    case 'assign':
      body.assigns.push({ scope, item });
      break;
    case 'instances':
      body.instances.push({ scope, item });
      break;
    case 'always':
      body.processes.push({ scope, item });
      declareBlocks(body, scope, item.body);
      break;
    case 'initial':
      body.initials.push({ scope, item });
      declareBlocks(body, scope, item.body);
      break;
    case 'defparam':
      body.defparams.push({ scope, item });
      break;
    default:
      break;
  }
}

/** Makes the scopes of the named blocks inside a statement (clause 9.8.3). */
function declareBlocks(body: ModuleBody, scope: BlockScope, statement: Statement): void {
  switch (statement.kind) {
    case 'block': {
      let inner = scope;
      if (statement.name !== 0) {
        const { name, start, end } = statement;
        if (!body.isFree(scope, name, start, end)) return;
        inner = body.addBlock(scope, name, start, end);
        expandItems(body, inner, statement.declarations);
      }
      for (const each of statement.body) declareBlocks(body, inner, each);
      break;
    }
    case 'if': {
      // Chains of `else if` may be long.
      let rest: Statement | undefined = statement;
      for (; rest?.kind === 'if'; rest = rest.whenFalse) {
        declareBlocks(body, scope, rest.whenTrue);
      }
      if (rest !== undefined) declareBlocks(body, scope, rest);
      break;
    }
    case 'case':
      for (const item of statement.items) declareBlocks(body, scope, item.body);
      break;
    case 'for':
    case 'repeat':
    case 'while':
    case 'forever':
    case 'event':
    case 'delay':
    case 'wait':
      declareBlocks(body, scope, statement.body);
      break;
    default:
      break;
  }
}
