import { exists } from '../../../circuit/addresses.js';
import type { NetId } from '../../../circuit/ids.js';
import { type MemoryIndex, moduloPower } from '../../../circuit/memory.js';
import type { HeldMemory, IndexRange, MemoryBinding } from '../scope.js';
import type { Context } from './context.js';
import type { IndexValue } from './indexValue.js';
import type { Bits, Logic } from './logic.js';
import { REGISTER_LIMIT, wordWidth } from './memorySelect.js';
import { refuse } from './names.js';
import { forwarded, type WordWrite } from './wordWrites.js';

/** A place in a held memory: an address, and where it is 1 that no word has. */
export interface HeldPlace {
  readonly held: HeldMemory;
  readonly width: number;
  readonly address: Bits;
  readonly beyond: NetId;
}

/** How an index of an array is told in addresses: see `MemoryIndex`. */
export function memoryIndex({ low, high }: IndexRange): MemoryIndex {
  const size = high - low + 1;
  if (low >= 0) return { low, size, bits: Math.max(1, bitLength(high)) };
  const bits = 1 + Math.max(bitLength(Math.max(high, 0)), bitLength(-low - 1));
  return { low, size, bits };
}

const bitLength = (value: number): number => (value === 0 ? 0 : Math.floor(Math.log2(value)) + 1);

/** The place that indices mean in a held memory. */
export function heldPlace(
  memory: MemoryBinding,
  held: HeldMemory,
  values: readonly IndexValue[],
  { logic }: Context,
): HeldPlace {
  const address: NetId[] = [];
  const beyond: NetId[] = [];
  for (const [i, value] of values.entries()) {
    const index = held.indices[i]!;
    const part = addressPart(value, index, logic);
    address.push(...part.address);
    beyond.push(part.beyond);
  }
  return { held, width: wordWidth(memory), address, beyond: logic.any(beyond) };
}

function addressPart(
  value: IndexValue,
  { low, bits }: MemoryIndex,
  logic: Logic,
): { address: Bits; beyond: NetId } {
  if (value.kind === 'unknown') throw new Error('assertion: an unknown index has no address');
  if (value.kind === 'constant') {
    const number = moduloPower(value.value, bits);
    const bitAt = (bit: number): NetId =>
      Math.floor(number / 2 ** bit) % 2 ? logic.one : logic.zero;
    return { address: Array.from({ length: bits }, (_, bit) => bitAt(bit)), beyond: logic.zero };
  }
  const { bits: given, signed } = value;
  if (low < 0) {
    const whole = signed ? given : [...given, logic.zero];
    const sign = whole[whole.length - 1]!;
    const address = Array.from({ length: bits }, (_, bit) => whole[bit] ?? sign);
    const top = address[bits - 1]!;
    return { address, beyond: logic.any(whole.slice(bits).map((bit) => logic.xor(bit, top))) };
  }
  const magnitude = signed ? given.slice(0, -1) : given;
  const rest = signed ? given.slice(-1) : [];
  const address = Array.from({ length: bits }, (_, bit) => magnitude[bit] ?? logic.zero);
  return { address, beyond: logic.any([...rest, ...magnitude.slice(bits)]) };
}

/** The word at a place, with what the process itself has written to it by blocking assignments. */
export function readHeld(
  { held, width, address, beyond }: HeldPlace,
  context: Context,
  word: number | undefined,
): Bits {
  const { logic, store } = context;
  const isStatic = context.access !== 'all';
  const stored = isStatic
    ? Array.from({ length: width }, (_, bit) =>
        word === undefined ? logic.unknown : logic.constant(held.contents.bit(word, bit)),
      )
    : logic.sink.readMemory(held.number, address);
  const writes = store.wordsWritten(held);
  if (writes.length === 0) return stored.map((net) => logic.mux(beyond, net, logic.unknown));
  const isThere = logic.and(logic.not(beyond), exists(logic, held.indices, address));
  const own = forwarded(writes, address, stored, logic);
  return own.map((net) => logic.mux(isThere, logic.unknown, net));
}

/** Carries out writes on the power-up contents; all that they depend on must be constant. */
export function writeContents(writes: readonly WordWrite[], logic: Logic): void {
  for (const { memory, when, address, data, mask } of writes) {
    const word = wordOfAddress(memory, address, logic);
    if (word === undefined) continue;
    for (const [bit, net] of data.entries()) {
      const chosen = logic.and(when, mask[bit]!);
      if (logic.valueOf(chosen) === 0) continue;
      const before = logic.constant(memory.contents.bit(word, bit));
      const value = logic.valueOf(logic.mux(chosen, before, net));
      memory.contents.setBit(word, bit, value ?? 2);
    }
  }
}

function wordOfAddress({ indices }: HeldMemory, address: Bits, logic: Logic): number | undefined {
  let word = 0;
  let place = 0;
  for (const { low, size, bits } of indices) {
    let number = 0;
    for (let bit = place + bits - 1; bit >= place; bit--) {
      const value = logic.valueOf(address[bit]!);
      if (value !== 0 && value !== 1) return undefined;
      number = number * 2 + value;
    }
    place += bits;
    const element = moduloPower(number - low, bits);
    if (element >= size) return undefined;
    word = word * size + element;
  }
  return word;
}

/**
 * Says that a write to a held memory is one that only registers can make, if the memory is too large
 * for these; otherwise its module is compiled anew and this does not return.
 */
export function refuseHeld({ memory, place }: WordWrite, what: string, context: Context): void {
  const { shared } = context.scope;
  shared.needRegisters?.(memory);
  const why =
    memory.isWritten === true
      ? 'its own module writes it too, and registers have one process alone that writes them'
      : `it is larger than the ${REGISTER_LIMIT} bits that registers can hold`;
  const message = `this memory ${what}; ${why}`;
  refuse(context, { start: place, end: place }, message);
}
