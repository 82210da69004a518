import { type Hierarchy, nameAt, scopePath } from '../hierarchy.js';

/** Two names that differ in nothing but the case of letters. */
export interface CaseTwins {
  readonly first: string;
  readonly second: string;
  /** The net of the second, where the names are of signals. */
  readonly net: number | undefined;
}

/**
 * Signals of one module, and instances in one scope, whose names differ only in the case of
 * the letters A to Z. Of a module with several instances the first is told.
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
    const placed = (i: number): number => scopeStart[scope]! + signals.at(i)!.offset;
    const nameOf = (i: number): string => {
      const name = nameAt(hierarchy, placed(i));
      return signals.at(i)!.isVector ? name.slice(0, name.lastIndexOf('[')) : name;
    };
    return twinsAmong(signals.length, (i) => signals.at(i)!.name).map(([first, second]) => ({
      first: nameOf(first),
      second: nameOf(second),
      net: netOf[placed(second)]!,
    }));
  });
}

function scopeTwins(hierarchy: Hierarchy): CaseTwins[] {
  const { scopeNames, scopeParent } = hierarchy;
  const twins = twinsAmong(scopeNames.length, (s) => scopeNames.at(s)!, scopeParent);
  return twins
    .filter(([first]) => first !== 0)
    .map(([first, second]) => ({
      first: scopePath(hierarchy, first),
      second: scopePath(hierarchy, second),
      net: undefined,
    }));
}

/** Pairs of indices whose names, within one group, differ in case alone; one pair a name. */
function twinsAmong(
  count: number,
  nameOf: (index: number) => string,
  group?: Uint32Array,
): [number, number][] {
  // Open addressing over indices: a netlist has millions of names, and few that are alike.
  const mask = 2 ** Math.ceil(Math.log2(2 * count + 2)) - 1;
  const slots = new Int32Array(mask + 1).fill(-1);
  const pairs = new Map<number, [number, number]>();
  for (let i = 0; i < count; i++) {
    const name = nameOf(i);
    const isAlike = (other: number): boolean =>
      group?.[other] === group?.[i] && areAlike(nameOf(other), name);
    let slot = foldedHash(name, group?.[i] ?? 0) & mask;
    while (slots[slot]! >= 0 && !isAlike(slots[slot]!)) slot = (slot + 1) & mask;
    const first = slots[slot]!;
    if (first < 0) slots[slot] = i;
    else if (nameOf(first) !== name && !pairs.has(first)) pairs.set(first, [first, i]);
  }
  return [...pairs.values()];
}

// FNV-1a (http://www.isthe.com/chongo/tech/comp/fnv/) over the name with small letters.
function foldedHash(name: string, start: number): number {
  let hash = 0x811c9dc5 ^ start;
  for (let i = 0; i < name.length; i++) hash = Math.imul(hash ^ folded(name, i), 0x01000193);
  return hash ^ (hash >>> 15);
}

function areAlike(a: string, b: string): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (folded(a, i) !== folded(b, i)) return false;
  return true;
}

/** A character, the letters A to Z made small. */
function folded(name: string, i: number): number {
  const code = name.charCodeAt(i);
  return code >= 65 && code <= 90 ? code + 32 : code;
}
