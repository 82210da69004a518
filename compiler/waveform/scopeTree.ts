import type { Hierarchy } from '../circuit/hierarchy.js';
import type { SignalList } from './signalList.js';

/** The scopes that have a signal in a list or lead to one. */
export interface Scopes {
  /** Entries of the list in a scope. */
  entries(scope: number): Uint32Array;
  /** Scopes in a scope that have entries or lead to some, the last one first. */
  children(scope: number): Uint32Array;
}

/** Finds the scopes of a list of signals. */
export function scopesOf(hierarchy: Hierarchy, list: SignalList): Scopes {
  const { scopeParent } = hierarchy;
  const count = scopeParent.length;
  const isNeeded = new Uint8Array(count);
  isNeeded[0] = 1;
  for (const scope of list.scope) {
    for (let s = scope; isNeeded[s] === 0; s = scopeParent[s]!) isNeeded[s] = 1;
  }
  const inner = Array.from({ length: count }, (_, scope) => scope).filter(
    (scope) => scope > 0 && isNeeded[scope] === 1,
  );
  const entries = grouped(count, list.scope, Array.from(list.scope.keys()));
  const children = grouped(
    count,
    inner.map((scope) => scopeParent[scope]!),
    inner,
  );
  return { entries, children: (scope) => children(scope).toReversed() };
}

/** Items by their group, in order. */
function grouped(groups: number, groupOf: ArrayLike<number>, items: ArrayLike<number>) {
  const start = new Uint32Array(groups + 1);
  for (let i = 0; i < items.length; i++) start[groupOf[i]! + 1]!++;
  for (let group = 0; group < groups; group++) start[group + 1]! += start[group]!;
  const next = start.slice(0, groups);
  const sorted = new Uint32Array(items.length);
  for (let i = 0; i < items.length; i++) sorted[next[groupOf[i]!]!++] = items[i]!;
  return (group: number) => sorted.subarray(start[group]!, start[group + 1]!);
}
