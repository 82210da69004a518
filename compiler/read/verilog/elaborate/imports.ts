import type { NetId } from '../../../circuit/ids.js';
import type { Binding } from '../scope.js';
import type { Children } from './children.js';
import { mapBinding } from './mapBinding.js';
import type { Recording } from './recording.js';
import type { Template } from './template.js';

/** A binding inside a child, told in the parent; undefined for a routine. */
export function imported(
  binding: Binding,
  child: number,
  template: Template,
  children: Children,
  recording: Recording,
): Binding | undefined {
  return mapBinding(binding, {
    net: (inside) => {
      const net = (template.canonical?.[inside] ?? inside) as NetId;
      const place = template.boundary.indexOf(net);
      return children.import(child, net, place, () => recording.net());
    },
    memory: ({ number }) => {
      const memory = template.recording.memories[number]!;
      return children.importMemory(child, number, () => recording.farMemory(memory));
    },
  });
}
