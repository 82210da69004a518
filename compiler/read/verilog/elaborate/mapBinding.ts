import type { NetId } from '../../../circuit/ids.js';
import { isPureFunction } from '../behaviour/index.js';
import type { Binding, HeldMemory } from '../scope.js';

/** How nets and memories of one module are told in another. */
export interface ModuleMap {
  net(net: NetId): NetId;
  memory(memory: HeldMemory): HeldMemory;
}

/**
 * A binding told in another module; undefined for a task, and for a function that names nets of its
 * own module.
 */
export function mapBinding(binding: Binding, map: ModuleMap): Binding | undefined {
  const { net } = map;
  switch (binding.kind) {
    case 'signal':
      return { ...binding, nets: binding.nets.map(net) };
    case 'memory':
      if (binding.held !== undefined) return { ...binding, held: map.memory(binding.held) };
      return { ...binding, words: binding.words.map((word) => word.map(net)) };
    case 'parameter':
      return binding;
    case 'routine':
      return isPureFunction(binding.syntax, binding.scope) ? binding : undefined;
  }
}
