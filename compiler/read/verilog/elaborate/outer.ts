import type { NetId } from '../../../circuit/ids.js';
import type { NameId } from '../../names.js';
import type { Binding, HeldMemory } from '../scope.js';
import type { BlockScope, ScopeHost } from './blockScope.js';
import { mapBinding } from './mapBinding.js';

/** Where an instance stands whose module is being compiled. */
export interface Outer {
  readonly host: OuterHost;
  readonly scope: BlockScope;
  /** Name of the instance, without the index of an array; 0 where it has none. */
  readonly name: NameId;
}

/** A module that is being compiled for one place in the hierarchy. */
export interface OuterHost extends ScopeHost {
  /** Undefined for the top. */
  readonly outer: Outer | undefined;
  /** Set once a name has led above the module: it is compiled for this one place then. */
  dependsOnPlace: boolean;
  /** Its own net that stands for a net of the module around it. */
  ownNet(outside: NetId): NetId;
  /** Likewise for a memory. */
  ownMemory(outside: HeldMemory): HeldMemory;
}

/** A net of a module that is one with a net of the module around it. */
export interface OuterNet {
  readonly net: NetId;
  readonly outside: NetId;
}

/** A memory of a module, by its number, that stands for one of the module around it. */
export interface OuterMemory {
  readonly memory: number;
  readonly outside: HeldMemory;
}

/**
 * The meaning of a path that begins above a module (IEEE 1364-2005, clause 12.6): at the name of
 * an instance or module around it, or of a block or instance that is visible from there. Told in
 * nets of the module; undefined where no level has it.
 */
export function bindingAbove(host: OuterHost, path: readonly NameId[]): Binding | undefined {
  if (path.length < 2) return undefined;
  const [first] = path;
  let inner = host;
  for (let outer = host.outer; outer !== undefined; outer = inner.outer) {
    if (first === outer.name) {
      const binding = inner.blocks[0]!.member(path, 1);
      // Another instance of this module has another name.
      if (binding !== undefined) inner.dependsOnPlace = true;
      if (binding !== undefined) return lifted(host, inner, binding);
    }
    const binding =
      outer.scope.owner(first!)?.member(path, 0) ??
      (first === outer.host.moduleName ? outer.host.blocks[0]!.member(path, 1) : undefined);
    if (binding !== undefined) return lifted(host, outer.host, binding);
    inner = outer.host;
  }
  return undefined;
}

function lifted(host: OuterHost, owner: OuterHost, binding: Binding): Binding | undefined {
  for (let at = host; at !== owner; at = at.outer!.host) at.dependsOnPlace = true;
  if (host === owner) return binding;
  return mapBinding(binding, {
    net: (net) => ownNetOf(host, owner, net),
    memory: (memory) => ownMemoryOf(host, owner, memory),
  });
}

/** The net of a module that stands for a net of one somewhere around it. */
function ownNetOf(host: OuterHost, owner: OuterHost, net: NetId): NetId {
  if (host === owner) return net;
  return host.ownNet(ownNetOf(host.outer!.host, owner, net));
}

function ownMemoryOf(host: OuterHost, owner: OuterHost, memory: HeldMemory): HeldMemory {
  if (host === owner) return memory;
  return host.ownMemory(ownMemoryOf(host.outer!.host, owner, memory));
}
