import type { NameId } from '../../names.js';
import { evaluateConstant } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { BlockScope } from './blockScope.js';
import { type Located, type ModuleBody, NOT_PLACED } from './body.js';
import { numberOf } from './constants.js';
import type { DeepOverride, Overrides } from './overrides.js';
import { SymbolKind } from './symbols.js';

const none: ReadonlyMap<number, Overrides> = new Map();

interface Collected {
  readonly values: Map<NameId, Constant>;
  readonly deep: DeepOverride[];
}

/**
 * What `defparam` gives to the instances of a module, by their number: those of its own text, and
 * `deep` ones from further up, which come after and win (IEEE 1364-2005, clause 12.2.1).
 */
export function defparamsOf(
  body: ModuleBody,
  deep: readonly DeepOverride[],
): ReadonlyMap<number, Overrides> {
  if (body.defparams.length === 0 && deep.length === 0) return none;
  const collected = new Map<number, Collected>();
  for (const { scope, item } of body.defparams) {
    const value = evaluateConstant(item.value, scope);
    if (value === undefined) continue;
    const path = elementsOf(body, scope, item);
    if (path === undefined) continue;
    const outcome = assignFrom(body, scope, path, value, collected);
    if (outcome !== 'assigned') reportDefparam(body, item, path, outcome);
  }
  for (const { path, value } of deep) assign(body, body.root, path, value, collected);
  return collected;
}

type Defparam = Located<'defparam'>['item'];

/** A path with the names of the elements that it has indices for; undefined after a report. */
function elementsOf(
  body: ModuleBody,
  scope: BlockScope,
  { path, indices }: Defparam,
): readonly NameId[] | undefined {
  const elements: NameId[] = [];
  for (const [i, name] of path.entries()) {
    const index = indices?.[i];
    const constant = index && evaluateConstant(index, scope);
    if (index !== undefined && constant === undefined) return undefined;
    const number = constant && numberOf(constant);
    elements.push(
      constant === undefined ? name : body.names.internText(`${body.text(name)}[${number}]`),
    );
  }
  return elements;
}

type Outcome = 'assigned' | 'unknown' | 'inArray';

/** Follows a path from where it stands, or from the module itself where it begins with its name. */
function assignFrom(
  body: ModuleBody,
  scope: BlockScope,
  path: readonly NameId[],
  value: Constant,
  collected: Map<number, Collected>,
): Outcome {
  const from = scope.owner(path[0]!);
  if (from !== undefined) return assign(body, from, path, value, collected);
  if (isInArray(body, scope, path[0]!)) return 'inArray';
  if (path[0] !== body.moduleName) return 'unknown';
  return assign(body, body.root, path.slice(1), value, collected);
}

function reportDefparam(
  body: ModuleBody,
  { start, end }: Defparam,
  path: readonly NameId[],
  outcome: Outcome,
): void {
  const text = path.map((name) => body.text(name)).join('.');
  if (outcome === 'inArray') {
    const message =
      `defparam ${text} sets a parameter of one element of an array of instances, which all ` +
      'have the same parameters; make them by a generate loop';
    body.report('not-supported', message, start, end);
    return;
  }
  const message = `defparam ${text} leads to no parameter of an instance in this module`;
  body.report('name-undeclared', message, start, end);
}

/** Whether `u[2]` names an element of an array: these have no symbols yet. */
function isInArray(body: ModuleBody, scope: BlockScope, element: NameId): boolean {
  const text = body.text(element);
  const bracket = text.lastIndexOf('[');
  if (bracket <= 0 || text.startsWith('\\')) return false;
  const name = body.names.internText(text.slice(0, bracket));
  const owner = scope.owner(name);
  return owner?.symbols.kind(owner.symbols.find(name)) === SymbolKind.Instance;
}

/** Follows a path through blocks to an instance. */
function assign(
  body: ModuleBody,
  from: BlockScope,
  path: readonly NameId[],
  value: Constant,
  collected: Map<number, Collected>,
): Outcome {
  let scope = from;
  for (let at = 0; at < path.length - 1; at++) {
    const symbol = scope.symbols.find(path[at]!);
    if (symbol < 0) return isInArray(body, scope, path[at]!) ? 'inArray' : 'unknown';
    const kind = scope.symbols.kind(symbol);
    if (kind === SymbolKind.Block) {
      scope = body.blocks[scope.symbols.value(symbol)]!;
    } else {
      const number = scope.symbols.value(symbol);
      if (kind !== SymbolKind.Instance || number === NOT_PLACED) return 'unknown';
      give(collected, number, path.slice(at + 1), value);
      return 'assigned';
    }
  }
  return 'unknown';
}

function give(
  collected: Map<number, Collected>,
  number: number,
  path: readonly NameId[],
  value: Constant,
): void {
  const known = collected.get(number);
  const own: Collected = known ?? { values: new Map(), deep: [] };
  if (known === undefined) collected.set(number, own);
  if (path.length === 1) own.values.set(path[0]!, value);
  else own.deep.push({ path, value });
}
