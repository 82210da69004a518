import type { Hierarchy } from '../hierarchy.js';

/**
 * How many instances there are of each module that contains no other, most frequent first: the
 * cells of a netlist. The top does not count as an instance.
 */
export function leafInstances(hierarchy: Hierarchy): readonly (readonly [string, number])[] {
  const { modules, scopeParent, scopeModule } = hierarchy;
  const isBlock = blockModules(hierarchy);
  const isInner = new Uint8Array(modules.length);
  const around = new Uint32Array(scopeParent.length);
  for (let scope = 1; scope < scopeParent.length; scope++) {
    const parent = scopeParent[scope]!;
    const isInBlock = isBlock[scopeModule[parent]!] === 1 && parent !== 0;
    around[scope] = isInBlock ? around[parent]! : parent;
    if (isBlock[scopeModule[scope]!] === 0) isInner[scopeModule[around[scope]!]!] = 1;
  }
  const counts = new Map<string, number>();
  for (let scope = 1; scope < scopeModule.length; scope++) {
    const module = scopeModule[scope]!;
    if (isInner[module] === 1 || isBlock[module] === 1) continue;
    const { name } = modules[module]!;
    counts.set(name, (counts.get(name) ?? 0) + 1);
  }
  return [...counts].sort(([, p], [, q]) => q - p);
}

/**
 * A 1 for each module that is a named or generated block. Readers give the scope of a block the
 * name of its module, right behind that of the module it stands in.
 */
function blockModules({ modules, scopeNames, scopeModule }: Hierarchy): Uint8Array {
  const isBlock = new Uint8Array(modules.length).fill(1);
  isBlock[scopeModule[0]!] = 0;
  for (let scope = 1; scope < scopeModule.length; scope++) {
    const module = scopeModule[scope]!;
    const isNamedAlike = scopeNames.at(scope) === modules[module]!.name;
    if (!isNamedAlike || scopeModule[scope - 1] !== module - 1) isBlock[module] = 0;
  }
  return isBlock;
}
