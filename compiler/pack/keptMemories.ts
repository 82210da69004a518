import { wordBytes } from '../../runtime/memoryState.js';
import type { KeptMemory } from '../../runtime/model/description.js';
import type { Design } from '../compile.js';

/** The memories of a package, whose words can all be looked at. */
export function keptMemories({ circuit, layout: { threeValued } }: Design): KeptMemory[] {
  let from = 0;
  return circuit.memories.map((memory) => {
    const { name, width, depth, indices } = memory;
    const kept = { name, width, indices: indices.map(({ low, size }) => ({ low, size })), from };
    from += depth * wordBytes(memory, threeValued);
    return kept;
  });
}

/** The indices of a memory as a reader sees them: `[0 to 1023]`. */
export const rangesOf = (indices: KeptMemory['indices']): string =>
  indices.map(({ low, size }) => `[${low} to ${low + size - 1}]`).join('');
