import type { Engine } from '../../runtime/engine.js';
import { powerUpSeed, RandomBits } from '../../runtime/random.js';
import type { Circuit } from './circuit.js';
import { depthOf, type MemoryShape } from './memory.js';
import type { PowerUp } from './powerUp.js';

// FNV-1a of 64 bits, after G. Fowler, L. C. Noll, K.-P. Vo.
const HASH_START = 0xcbf2_9ce4_8422_2325n;
const HASH_PRIME = 0x100_0000_01b3n;

/**
 * The contents of all memories at power-up, as `Engine.loadMemory` takes them.
 *
 * What the netlist itself gives wins. Mode `random` gives bit b of word w of a memory bit
 * `w * width + b` of a stream of the memory's own, which depends on its name (64-bit FNV-1a of it,
 * exclusive-or of `powerUpSeed(seed)`), so that no other memory moves it. The default seed is 0. Without three values, mode `unknown` gives 0.
 */
export function powerUpMemory(
  memories: readonly MemoryShape[],
  threeValued: boolean,
  mode: PowerUp,
  seed: number | bigint = 0,
): Uint8Array {
  const parts = memories.map((memory) =>
    contentsOf(memory, threeValued, fillOf(mode, threeValued, memory, seed)),
  );
  const contents = new Uint8Array(parts.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const part of parts) {
    contents.set(part, at);
    at += part.length;
  }
  return contents;
}

/** What an engine starts with and `Engine.reset` goes back to: 0, or x, where nothing is given. */
export const initialMemory = (memories: readonly MemoryShape[], threeValued: boolean): Uint8Array =>
  powerUpMemory(memories, threeValued, threeValued ? 'unknown' : 'zero');

/** Gives the memories of an engine that has been reset their contents at power-up. */
export function powerUpMemories(
  engine: Engine,
  { memories }: Pick<Circuit, 'memories'>,
  mode: PowerUp,
  seed: number | bigint,
): void {
  const { threeValued } = engine.layout;
  // With these modes a reset has done it.
  if (memories.length === 0 || mode === (threeValued ? 'unknown' : 'zero')) return;
  engine.loadMemory(powerUpMemory(memories, threeValued, mode, seed));
}

/** A byte of ones and one of x for eight bits of a word from `bit` on. */
type Fill = (word: number, bit: number) => { ones: number; unknown: number };

function contentsOf(
  { width, indices, initial }: MemoryShape,
  threeValued: boolean,
  fill: Fill,
): Uint8Array {
  const group = Math.ceil(width / 8);
  const depth = depthOf(indices);
  const step = threeValued ? 2 * group : group;
  const contents = new Uint8Array(depth * step);
  for (let word = 0; word < depth; word++) {
    for (let byte = 0; byte < group; byte++) {
      const bits = byte * 8 + 8 > width ? (1 << (width % 8)) - 1 : 0xff;
      const given = initial?.[word * 2 * group + byte] ?? 0;
      const open = initial === undefined ? bits : initial[word * 2 * group + group + byte]!;
      const { ones, unknown } = open === 0 ? none : fill(word, byte * 8);
      contents[word * step + byte] = given | (ones & open);
      if (threeValued) contents[word * step + group + byte] = unknown & open;
    }
  }
  return contents;
}

const none = { ones: 0, unknown: 0 };

function fillOf(
  mode: PowerUp,
  threeValued: boolean,
  memory: MemoryShape,
  seed: number | bigint,
): Fill {
  const constants = {
    zero: none,
    one: { ones: 0xff, unknown: 0 },
    unknown: threeValued ? { ones: 0, unknown: 0xff } : none,
  };
  if (mode !== 'random') {
    const constant = constants[mode];
    return () => constant;
  }
  const { name, width, indices } = memory;
  const words = new Uint32Array(Math.ceil((depthOf(indices) * width) / 32) + 1);
  new RandomBits(powerUpSeed(seed) ^ hashOf(name)).fill(words, 0, words.length);
  return (word, bit) => {
    const at = word * width + bit;
    const low = words[at >>> 5]! >>> (at & 31);
    const high = (at & 31) > 24 ? words[(at >>> 5) + 1]! << (32 - (at & 31)) : 0;
    return { ones: (low | high) & 0xff, unknown: 0 };
  };
}

function hashOf(name: string): bigint {
  let hash = HASH_START;
  for (const byte of new TextEncoder().encode(name)) {
    hash = BigInt.asUintN(64, (hash ^ BigInt(byte)) * HASH_PRIME);
  }
  return hash;
}
