import { addressBits, type WordForm } from '../../../circuit/memory.js';
import { memoryIndex } from '../behaviour/heldMemory.js';
import { InitialContents } from '../initialContents.js';
import type { HeldMemory, IndexRange } from '../scope.js';
import type { DeclaredName } from '../syntax.js';
import { type BlockScope, wordsOf } from './blockScope.js';
import type { ModuleBody } from './body.js';

/** Width of the words of an array, and the ranges of its indices. */
export interface ArraySize {
  readonly width: number;
  readonly indices: readonly IndexRange[];
}

/** The largest memory, in bits. */
export const MEMORY_LIMIT = 2 ** 28;

// More bits than this are no array of nets or registers that anybody means.
const NETS_LIMIT = 2 ** 22;

// An address is a number of 32 bits.
const ADDRESS_LIMIT = 31;

const bitsOf = ({ width, indices }: ArraySize): number => wordsOf(indices) * width;

/** Whether an array of variables has at least so many bits. */
export const isHeldFrom = (size: ArraySize, bits: number): boolean => bitsOf(size) >= bits;

/** What is wrong with the size of an array; undefined where nothing is. */
export function sizeProblem(size: ArraySize, isHeld: boolean): string | undefined {
  const bits = bitsOf(size);
  if (!isHeld) {
    if (bits <= NETS_LIMIT) return undefined;
    return `has ${bits} bits, which are nets each for itself; ${NETS_LIMIT} are the most`;
  }
  if (bits > MEMORY_LIMIT) {
    return `has ${bits} bits; a memory holds ${MEMORY_LIMIT} at most, so make it smaller`;
  }
  const address = addressBits(size.indices.map(memoryIndex));
  if (address <= ADDRESS_LIMIT) return undefined;
  return `takes an address of ${address} bits; ${ADDRESS_LIMIT} are the most, so use fewer indices`;
}

/** Makes the memory that holds an array. */
export function heldMemory(
  { builder, names }: ModuleBody,
  { index: block }: BlockScope,
  { width, indices: ranges }: ArraySize,
  word: WordForm,
  { name, start: position }: DeclaredName,
): HeldMemory {
  const indices = ranges.map(memoryIndex);
  const contents = new InitialContents(width, wordsOf(ranges));
  const text = names.text(name);
  const number = builder.memory({ name: text, block, width, word, indices, contents, position });
  return { number, indices, contents, position };
}
