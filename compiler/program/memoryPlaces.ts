import { depthOf, type MemoryShape } from '../circuit/memory.js';
import { initialMemory } from '../circuit/powerUpMemory.js';

export { moduloPower } from '../circuit/memory.js';

/** A memory and where it stands; addresses and sizes in bytes. */
export interface MemoryPlace {
  readonly shape: MemoryShape;
  readonly base: number;
  /** Bytes of a word: two groups where it is three-valued. */
  readonly step: number;
  /** Bytes of the first group. */
  readonly group: number;
  /** A word that is read where there is none: 0, or x. */
  readonly nowhere: number;
}

/** Where the contents of all memories stand: those of `Engine.memoryState`, in one piece. */
export interface MemoryPlaces {
  readonly threeValued: boolean;
  readonly places: readonly MemoryPlace[];
  readonly start: number;
  /** First byte behind them that is free. */
  readonly end: number;
}

/** Words are read four bytes at a time, so that the last one must have some bytes behind it. */
const BEYOND = 16;

/** Lays the memories out from an address on. */
export function layMemories(
  memories: readonly MemoryShape[],
  threeValued: boolean,
  start: number,
): MemoryPlaces {
  const sizes = memories.map((shape) => {
    const group = Math.ceil(shape.width / 8);
    const step = threeValued ? 2 * group : group;
    return { shape, group, step, size: depthOf(shape.indices) * step };
  });
  let base = start;
  let nowhere = start + sizes.reduce((sum, { size }) => sum + size, 0);
  const places = sizes.map(({ shape, group, step, size }) => {
    const place = { shape, group, step, base, nowhere };
    base += size;
    nowhere += step;
    return place;
  });
  const end = memories.length === 0 ? start : nowhere + BEYOND;
  return { threeValued, places, start, end };
}

/** The bytes from `start` on at first: the initial contents, and the words that are nowhere. */
export function memoryImage({ places, threeValued, start, end }: MemoryPlaces): Uint8Array {
  const image = new Uint8Array(end - start);
  image.set(
    initialMemory(
      places.map(({ shape }) => shape),
      threeValued,
    ),
  );
  if (!threeValued) return image;
  for (const { nowhere, group, shape } of places) {
    const first = nowhere - start + group;
    image.fill(0xff, first, first + group);
    if (shape.width % 8 > 0) image[first + group - 1] = (1 << (shape.width % 8)) - 1;
  }
  return image;
}

/** Stretches of bytes that are not all 0, so that much nothing takes no room in a module. */
export function segmentsOf(image: Uint8Array): { at: number; data: Uint8Array }[] {
  const segments: { at: number; data: Uint8Array }[] = [];
  for (let at = 0; at < image.length; ) {
    while (at < image.length && image[at] === 0) at++;
    if (at === image.length) break;
    const start = at;
    for (let zeros = 0; at < image.length && zeros < GAP; at++)
      zeros = image[at] === 0 ? zeros + 1 : 0;
    segments.push({ at: start, data: image.subarray(start, at) });
  }
  return segments;
}

/** So many zeros end a segment: fewer take less room than a segment of their own. */
const GAP = 64;
