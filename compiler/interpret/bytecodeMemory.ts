import { wordAt } from '../circuit/memory.js';
import type { LogicWrite } from '../logic/logic.js';
import { mapWrite } from '../logic/writes.js';
import {
  layMemories,
  type MemoryPlace,
  type MemoryPlaces,
  memoryImage,
} from '../program/memoryPlaces.js';
import type { CyclePrograms } from '../program/program.js';

/** The contents of all memories, which the programs of a design share. */
export class BytecodeMemory {
  /** As `Engine.memoryState` gives them, and behind them the words that are nowhere. */
  readonly bytes: Uint8Array;
  readonly #places: MemoryPlaces;
  readonly #size: number;
  readonly #initial: Uint8Array;

  constructor({ memories }: Pick<CyclePrograms, 'memories'>, threeValued: boolean) {
    this.#places = layMemories(memories, threeValued, 0);
    this.bytes = memoryImage(this.#places);
    this.#size = this.#places.places[0]?.nowhere ?? 0;
    this.#initial = this.contents.slice();
  }

  /** The contents alone. */
  get contents(): Uint8Array {
    return this.bytes.subarray(0, this.#size);
  }

  /** Goes back to what was there at first. */
  reset(): void {
    this.bytes.set(this.#initial);
  }

  /** Place of the bytes of the word at an address, see `ProgramOp.Load`. */
  word(memory: number, address: number, isValid: boolean): number {
    const place = this.#places.places[memory]!;
    const word = isValid ? wordOf(place, address) : -1;
    return word < 0 ? place.nowhere : place.base + word * place.step;
  }

  /** Makes what carries out a write, whose values stand in `values` at the places given. */
  writer(write: LogicWrite, values: Int32Array, placeOf: (value: number) => number): () => void {
    const place = this.#places.places[write.memory]!;
    const { threeValued } = this.#places;
    const writer = new MemoryWriter(
      place,
      mapWrite(write, placeOf),
      values,
      this.bytes,
      threeValued,
    );
    return () => writer.run();
  }
}

const wordOf = ({ shape }: MemoryPlace, address: number): number =>
  wordAt(shape.indices, (at, bits) => (address >>> at) & (2 ** bits - 1));

/** Carries out one write of a program. */
class MemoryWriter {
  readonly #place: MemoryPlace;
  readonly #write: LogicWrite;
  readonly #values: Int32Array;
  readonly #bytes: Uint8Array;
  readonly #threeValued: boolean;

  constructor(
    place: MemoryPlace,
    write: LogicWrite,
    values: Int32Array,
    bytes: Uint8Array,
    threeValued: boolean,
  ) {
    this.#place = place;
    this.#write = write;
    this.#values = values;
    this.#bytes = bytes;
    this.#threeValued = threeValued;
  }

  run(): void {
    const { enable, surely, address, addressUnknown } = this.#write;
    if (this.#values[enable] === 0) return;
    const given = this.#number(address, 0, address.length);
    const unknown = this.#number(addressUnknown, 0, addressUnknown.length);
    const isSure = unknown === 0 && this.#values[surely] !== 0;
    // Every subset of the unknown bits, from all of them down to none.
    for (let choice = unknown; ; choice = (choice - 1) & unknown) {
      const word = wordOf(this.#place, given | choice);
      if (word >= 0) this.#store(this.#place.base + word * this.#place.step, isSure);
      if (choice === 0) return;
    }
  }

  #store(at: number, isSure: boolean): void {
    const { group } = this.#place;
    const { data, dataUnknown, mask, maskSurely } = this.#write;
    const bytes = this.#bytes;
    for (let byte = 0; byte < group; byte++) {
      const count = Math.min(8, data.length - byte * 8);
      const all = 2 ** count - 1;
      const may = mask.length > 0 ? this.#number(mask, byte * 8, count) : all;
      const ones = this.#number(data, byte * 8, count);
      const old = bytes[at + byte]!;
      if (!this.#threeValued) {
        bytes[at + byte] = old ^ ((old ^ ones) & may);
        continue;
      }
      const sureMask = maskSurely.length > 0 ? this.#number(maskSurely, byte * 8, count) : all;
      const stays = all & ~(isSure ? sureMask : 0);
      const unknown = this.#number(dataUnknown, byte * 8, count);
      const mayBeOne = (stays & (old | bytes[at + group + byte]!)) | (may & (ones | unknown));
      const mayBeZero = (stays & ~old) | (may & ~ones);
      bytes[at + byte] = mayBeOne & ~mayBeZero;
      bytes[at + group + byte] = mayBeOne & mayBeZero;
    }
  }

  #number(places: readonly number[], first: number, count: number): number {
    let number = 0;
    for (let i = first + count - 1; i >= first; i--) {
      number = number * 2 + (this.#values[places[i]!]! & 1);
    }
    return number;
  }
}
