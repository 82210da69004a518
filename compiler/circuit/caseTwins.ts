import { type Hierarchy, nameAt, scopePath } from './hierarchy.js';

/** Two names that differ in nothing but the case of letters. */
export interface CaseTwins {
  readonly first: string;
  readonly second: string;
  /** The net of the second, where the names are of signals. */
  readonly net: number | undefined;
}

/**
 * Signals of one module, and instances in one scope, whose names differ only in the case of
 * letters. Of a module with several instances the first is told.
 */
export function caseTwins(hierarchy: Hierarchy): CaseTwins[] {
  return [...signalTwins(hierarchy), ...scopeTwins(hierarchy)];
}

function signalTwins(hierarchy: Hierarchy): CaseTwins[] {
  const { modules, scopeModule, scopeStart, netOf } = hierarchy;
  const firstScope = new Int32Array(modules.length).fill(-1);
  for (let s = scopeModule.length - 1; s >= 0; s--) firstScope[scopeModule[s]!] = s;
  return modules.flatMap(({ signals }, module) => {
    const scope = firstScope[module]!;
    if (scope < 0) return [];
    const placed = (i: number) => scopeStart[scope]! + signals[i]!.offset;
    const nameOf = (i: number) => nameAt(hierarchy, placed(i)).replace(/\[[^\]]*\]$/, '');
    return twinsAmong(signals.length, (i) => signals[i]!.name).map(([first, second]) => ({
      first: signals[first]!.isVector ? nameOf(first) : nameAt(hierarchy, placed(first)),
      second: signals[second]!.isVector ? nameOf(second) : nameAt(hierarchy, placed(second)),
      net: netOf[placed(second)]!,
    }));
  });
}

function scopeTwins(hierarchy: Hierarchy): CaseTwins[] {
  const { scopeNames, scopeParent } = hierarchy;
  const twins = twinsAmong(scopeNames.length, (s) => scopeNames[s]!, scopeParent);
  return twins
    .filter(([first]) => first !== 0)
    .map(([first, second]) => ({
      first: scopePath(hierarchy, first),
      second: scopePath(hierarchy, second),
      net: undefined,
    }));
}

const hasLarge = (name: string): boolean => /\p{Lu}/u.test(name);
const hasSmall = (name: string): boolean => /\p{Ll}/u.test(name);

/** Pairs of indices whose names, within one group, differ in case alone. */
function twinsAmong(
  count: number,
  nameOf: (index: number) => string,
  group?: Uint32Array,
): [number, number][] {
  // Of two such names, one has a large letter and the other a small one: names of which a netlist
  // has many mostly have only one sort, and then there is nothing to compare.
  const large: number[] = [];
  const small: number[] = [];
  for (let i = 0; i < count; i++) {
    const name = nameOf(i);
    if (hasLarge(name)) large.push(i);
    if (hasSmall(name)) small.push(i);
  }
  const [few, many] = large.length < small.length ? [large, small] : [small, large];
  const keyOf = (i: number): string => `${group?.[i] ?? ''} ${nameOf(i).toLowerCase()}`;
  const known = new Map<string, number>();
  for (const i of few) if (!known.has(keyOf(i))) known.set(keyOf(i), i);
  const pairs = new Map<string, [number, number]>();
  for (const i of known.size === 0 ? [] : many) {
    const key = keyOf(i);
    const other = known.get(key);
    if (other === undefined || nameOf(other) === nameOf(i) || pairs.has(key)) continue;
    pairs.set(key, other < i ? [other, i] : [i, other]);
  }
  return [...pairs.values()];
}
