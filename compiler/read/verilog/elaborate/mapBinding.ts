import type { NetId } from '../../../circuit/ids.js';
import type { Binding } from '../scope.js';

/** A binding with other nets; undefined for a routine, which reads nets of its own module. */
export function mapBinding(binding: Binding, map: (net: NetId) => NetId): Binding | undefined {
  switch (binding.kind) {
    case 'signal':
      return { ...binding, nets: binding.nets.map(map) };
    case 'memory':
      if (binding.held !== undefined) return { ...binding, isFar: true };
      return { ...binding, words: binding.words.map((word) => word.map(map)) };
    case 'parameter':
      return binding;
    case 'routine':
      return undefined;
  }
}
