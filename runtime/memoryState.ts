import type { MemoryLayout, ModelLayout } from './layout.js';

/**
 * Bytes of one word of a memory in `Engine.memoryState`: its bits, least significant first, packed
 * into whole bytes (bit b is bit `b % 8` of byte `b >> 3`; what is left over is 0). In three-valued
 * models as many bytes follow, with a 1 for each bit that is x (and 0 in the first group).
 */
export const wordBytes = ({ width }: MemoryLayout, threeValued: boolean): number =>
  Math.ceil(width / 8) * (threeValued ? 2 : 1);

/** What the bytes of memory contents depend on. */
export type MemoryShapes = Pick<ModelLayout, 'memories' | 'threeValued'>;

/** Bytes of the contents of all memories: memory after memory, word after word. */
export const memoryStateBytes = ({ memories, threeValued }: MemoryShapes): number =>
  memories.reduce((sum, memory) => sum + memory.depth * wordBytes(memory, threeValued), 0);

/** Checks what `Engine.loadMemory` is called with; throws RangeError for a wrong length or bit. */
export function checkMemoryState(layout: MemoryShapes, bytes: Uint8Array): void {
  const expected = memoryStateBytes(layout);
  if (bytes.length !== expected) {
    throw new RangeError(`expected ${expected} bytes of memory contents, got ${bytes.length}`);
  }
  let at = 0;
  for (const memory of layout.memories) {
    const group = Math.ceil(memory.width / 8);
    const beyond = memory.width % 8 === 0 ? 0 : 0xff & (0xff << (memory.width % 8));
    const step = wordBytes(memory, layout.threeValued);
    // Every byte is a value then.
    if (beyond === 0 && !layout.threeValued) {
      at += memory.depth * step;
      continue;
    }
    for (let word = 0; word < memory.depth; word++, at += step) {
      if (isWord(bytes, at, group, beyond, layout.threeValued)) continue;
      throw new RangeError(`byte ${at} and on: no value of ${memory.name}[${word}]`);
    }
  }
}

function isWord(
  bytes: Uint8Array,
  at: number,
  group: number,
  beyond: number,
  threeValued: boolean,
): boolean {
  if ((bytes[at + group - 1]! & beyond) !== 0) return false;
  if (!threeValued) return true;
  if ((bytes[at + 2 * group - 1]! & beyond) !== 0) return false;
  for (let i = at; i < at + group; i++) if ((bytes[i]! & bytes[i + group]!) !== 0) return false;
  return true;
}
