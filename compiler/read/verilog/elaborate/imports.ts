import type { NetId } from '../../../circuit/ids.js';
import type { Binding } from '../scope.js';
import type { Children } from './children.js';
import type { Recording } from './recording.js';
import type { Template } from './template.js';

/** A binding inside a child, told in nets of the parent; undefined for a routine. */
export function imported(
  binding: Binding,
  child: number,
  template: Template,
  children: Children,
  recording: Recording,
): Binding | undefined {
  const importNet = (inside: NetId): NetId => {
    const net = (template.canonical?.[inside] ?? inside) as NetId;
    const place = template.boundary.indexOf(net);
    return children.import(child, net, place, () => recording.net());
  };
  switch (binding.kind) {
    case 'signal':
      return { ...binding, nets: binding.nets.map(importNet) };
    case 'memory':
      return { ...binding, words: binding.words.map((word) => word.map(importNet)) };
    case 'parameter':
      return binding;
    case 'routine':
      return undefined;
  }
}
