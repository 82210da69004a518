import type { NameId } from '../../names.js';
import { evaluateConstant } from '../behaviour/index.js';
import type { Constant } from '../scope.js';
import type { BlockScope } from './blockScope.js';
import { type ModuleBody, NOT_PLACED } from './body.js';
import type { DeepOverride, Overrides } from './overrides.js';
import { SymbolKind } from './symbols.js';

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
  const collected = new Map<number, Collected>();
  for (const { scope, item } of body.defparams) {
    const value = evaluateConstant(item.value, scope);
    if (value === undefined) continue;
    const from = scope.owner(item.path[0]!);
    if (from !== undefined && assign(body, from, item.path, value, collected)) continue;
    const path = item.path.map((name) => body.text(name)).join('.');
    const message = `defparam ${path} leads to no parameter of an instance in this module`;
    body.report('name-undeclared', message, item.start, item.end);
  }
  for (const { path, value } of deep) assign(body, body.root, path, value, collected);
  return collected;
}

/** Follows a path through blocks to an instance; false if there is none. */
function assign(
  body: ModuleBody,
  from: BlockScope,
  path: readonly NameId[],
  value: Constant,
  collected: Map<number, Collected>,
): boolean {
  let scope = from;
  for (let at = 0; at < path.length - 1; at++) {
    const symbol = scope.symbols.find(path[at]!);
    if (symbol < 0) return false;
    const kind = scope.symbols.kind(symbol);
    if (kind === SymbolKind.Block) {
      scope = body.blocks[scope.symbols.value(symbol)]!;
    } else {
      const number = scope.symbols.value(symbol);
      if (kind !== SymbolKind.Instance || number === NOT_PLACED) return false;
      give(collected, number, path.slice(at + 1), value);
      return true;
    }
  }
  return false;
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
