import type binaryen from 'binaryen';
import type { MemoryPlace, MemoryPlaces } from '../../program/memoryPlaces.js';
import type { StagedBits, StagedWrite, Staging } from './staging.js';
import { pointerCode, wordCode } from './wordCode.js';

type Code = binaryen.ExpressionRef;

/** Writes in one function. */
const WRITES_IN_FUNCTION = 40;

/** Locals of a function that writes, its parameters first. */
const Local = {
  Current: 0,
  Next: 1,
  Row: 2,
  Address: 3,
  Unknown: 4,
  Choice: 5,
  Word: 6,
  Surely: 7,
  May0: 8,
  May1: 9,
};
const PARAMETER_COUNT = 3;
const LOCAL_COUNT = 10;

/**
 * Adds functions that carry out the staged writes in order; returns calls of them, which must stand
 * behind all else of the cycle. `pointers` gives the addresses of the area before the cycle, of the
 * one after it, and of the stimulus row. `wrote` names a global that each write sets to 1.
 */
export function emitWrites(
  wasm: typeof binaryen,
  module: binaryen.Module,
  cycle: string,
  { writes }: Staging,
  places: MemoryPlaces,
  pointers: () => readonly Code[],
  wrote?: string,
): Code[] {
  const calls: Code[] = [];
  const locals = new Array<binaryen.Type>(LOCAL_COUNT - PARAMETER_COUNT).fill(wasm.i32);
  const parameters = wasm.createType(new Array(PARAMETER_COUNT).fill(wasm.i32));
  for (let from = 0; from < writes.length; from += WRITES_IN_FUNCTION) {
    const emitter = new WriteEmitter(wasm, module, places, wrote);
    const some = writes.slice(from, from + WRITES_IN_FUNCTION);
    const name = `${cycle}_writes${from}`;
    module.addFunction(name, parameters, wasm.none, locals, module.block(null, emitter.all(some)));
    calls.push(module.call(name, [...pointers()], wasm.none));
  }
  return calls;
}

class WriteEmitter {
  readonly #module: binaryen.Module;
  readonly #type: binaryen.Type;
  readonly #places: MemoryPlaces;
  readonly #wrote: string | undefined;
  #labels = 0;

  constructor(
    wasm: typeof binaryen,
    module: binaryen.Module,
    places: MemoryPlaces,
    wrote: string | undefined,
  ) {
    this.#wrote = wrote;
    this.#module = module;
    this.#type = wasm.i32;
    this.#places = places;
  }

  // Writes under one condition, as many words that a reset clears, ask for it once.
  all(writes: readonly StagedWrite[]): Code[] {
    const statements: Code[] = [];
    for (let from = 0; from < writes.length; ) {
      const { enable } = writes[from]!;
      let to = from + 1;
      while (to < writes.length && writes[to]!.enable === enable) to++;
      const bodies = writes.slice(from, to).flatMap((write) => this.#write(write));
      if (this.#wrote !== undefined) {
        bodies.push(this.#module.global.set(this.#wrote, this.#module.i32.const(1)));
      }
      const body = this.#module.block(null, bodies);
      statements.push(this.#isOne(enable, body));
      from = to;
    }
    return statements;
  }

  #isOne(enable: StagedBits, body: Code): Code {
    if (enable.home !== 'constant') return this.#module.if(this.#bits(enable, 0, 1), body);
    return enable.values[0] === 1 ? body : this.#module.nop();
  }

  #write(write: StagedWrite): Code[] {
    const module = this.#module;
    const { i32, local } = module;
    const place = this.#places.places[write.memory]!;
    const address = this.#bits(write.address, 0, write.address.values.length);
    const setAddress = local.set(Local.Address, address);
    if (!this.#places.threeValued) {
      const stores = this.#inWord(
        place,
        () => this.#get(Local.Address),
        this.#storeBits(write, place),
      );
      return [setAddress, ...stores];
    }
    const unknown = this.#bits(write.addressUnknown, 0, write.addressUnknown.values.length);
    const surely = i32.and(i32.eqz(this.#get(Local.Unknown)), this.#bits(write.surely, 0, 1));
    const label = `choices${this.#labels++}`;
    const choice = () => i32.or(this.#get(Local.Address), this.#get(Local.Choice));
    // Every subset of the unknown bits, from all of them down to none.
    const following = i32.and(
      i32.sub(this.#get(Local.Choice), i32.const(1)),
      this.#get(Local.Unknown),
    );
    const goOn = module.if(
      this.#get(Local.Choice),
      module.block(null, [local.set(Local.Choice, following), module.br(label)]),
    );
    return [
      setAddress,
      local.set(Local.Unknown, unknown),
      local.set(Local.Surely, i32.sub(i32.const(0), surely)),
      local.set(Local.Choice, this.#get(Local.Unknown)),
      module.loop(
        label,
        module.block(null, [...this.#inWord(place, choice, this.#mergeBits(write, place)), goOn]),
      ),
    ];
  }

  /** Code with the address of the word in a local, if there is such a word. */
  #inWord(place: MemoryPlace, address: () => Code, body: readonly Code[]): Code[] {
    const module = this.#module;
    const { word, isThere } = wordCode(module, place, address);
    const setWord = module.local.set(Local.Word, pointerCode(module, place, word));
    if (isThere === undefined) return [setWord, ...body];
    return [module.if(isThere, module.block(null, [setWord, ...body]))];
  }

  #storeBits({ data, mask }: StagedWrite, { group, shape }: MemoryPlace): Code[] {
    const { i32 } = this.#module;
    return chunksOf(group, shape.width).map((chunk) => {
      const { first, count } = chunk;
      const value = this.#bits(data, first, count);
      if (mask.values.length === 0) return this.#store(chunk, 0, value);
      // old ^ ((old ^ value) & mask)
      const difference = i32.xor(this.#load(chunk, 0), value);
      const changed = i32.and(difference, this.#bits(mask, first, count));
      return this.#store(chunk, 0, i32.xor(this.#load(chunk, 0), changed));
    });
  }

  // What may be 1 and what may be 0 afterwards: of the old value where the bit may stay, of the data
  // where it may be written.
  #mergeBits(write: StagedWrite, { group, shape }: MemoryPlace): Code[] {
    const { i32, local } = this.#module;
    return chunksOf(group, shape.width).flatMap((chunk) => {
      const { first, count } = chunk;
      const all = () => i32.const(count === 32 ? -1 : 2 ** count - 1);
      const hasMask = write.mask.values.length > 0;
      const may = () => (hasMask ? this.#bits(write.mask, first, count) : all());
      const surely = hasMask
        ? i32.and(this.#get(Local.Surely), this.#bits(write.maskSurely, first, count))
        : i32.and(this.#get(Local.Surely), all());
      const ones = () => this.#bits(write.data, first, count);
      const unknown = this.#bits(write.dataUnknown, first, count);
      const old = () => this.#load(chunk, 0);
      const invert = (code: Code) => i32.xor(code, i32.const(-1));
      const stays = () => invert(this.#get(Local.May0));
      const may1 = i32.or(
        i32.and(stays(), i32.or(old(), this.#load(chunk, group))),
        i32.and(may(), i32.or(ones(), unknown)),
      );
      const may0 = i32.or(i32.and(stays(), invert(old())), i32.and(may(), invert(ones())));
      const one = i32.and(this.#get(Local.May1), invert(this.#get(Local.May0)));
      const both = i32.and(this.#get(Local.May1), this.#get(Local.May0));
      return [
        // For a moment, what is surely written.
        local.set(Local.May0, surely),
        local.set(Local.May1, may1),
        local.set(Local.May0, may0),
        this.#store(chunk, 0, one),
        this.#store(chunk, group, both),
      ];
    });
  }

  #load({ bytes, first }: Chunk, offset: number): Code {
    const { i32 } = this.#module;
    const at = offset + first / 8;
    const word = this.#get(Local.Word);
    if (bytes === 4) return i32.load(at, 1, word, '0');
    return bytes === 2 ? i32.load16_u(at, 1, word, '0') : i32.load8_u(at, 1, word, '0');
  }

  #store({ bytes, first }: Chunk, offset: number, value: Code): Code {
    const { i32 } = this.#module;
    const at = offset + first / 8;
    const word = this.#get(Local.Word);
    if (bytes === 4) return i32.store(at, 1, word, value, '0');
    return bytes === 2 ? i32.store16(at, 1, word, value, '0') : i32.store8(at, 1, word, value, '0');
  }

  /** `count` bits, at most 32, from the `from`-th one on as a number. */
  #bits({ values, home, first }: StagedBits, from: number, count: number): Code {
    const { i32 } = this.#module;
    if (home === 'constant') {
      const number = values.slice(from, from + count).reduceRight((sum, bit) => sum * 2 + bit, 0);
      return i32.const(number | 0);
    }
    if (home === 'row') return this.#rowBits(first + from, count);
    const area = home === 'next' ? Local.Next : Local.Current;
    const offset = first + from;
    if (count === 1) {
      const byte = i32.load8_u(offset, 1, this.#get(area), '0');
      return i32.and(byte, i32.const(1));
    }
    if (count <= 16) return this.#sixteen(area, offset, count);
    const high = this.#sixteen(area, offset + 16, count - 16);
    return i32.or(this.#sixteen(area, offset, 16), i32.shl(high, i32.const(16)));
  }

  #sixteen(area: number, offset: number, count: number): Code {
    const { i32, i8x16, v128 } = this.#module;
    const bytes = v128.load(offset, 1, this.#get(area), '0');
    const bits = i8x16.bitmask(i8x16.shl(bytes, i32.const(7)));
    return count === 16 ? bits : i32.and(bits, i32.const(2 ** count - 1));
  }

  // Whole words of the row, so that nothing behind it is loaded.
  #rowBits(bit: number, count: number): Code {
    const { i32 } = this.#module;
    const word = (number: number): Code => i32.load(number * 4, 4, this.#get(Local.Row), '0');
    const shift = bit & 31;
    const low = shift === 0 ? word(bit >>> 5) : i32.shr_u(word(bit >>> 5), i32.const(shift));
    const isSplit = shift + count > 32;
    const high = isSplit ? i32.shl(word((bit >>> 5) + 1), i32.const(32 - shift)) : undefined;
    const bits = high === undefined ? low : i32.or(low, high);
    return count === 32 ? bits : i32.and(bits, i32.const(2 ** count - 1));
  }

  #get(number: number): Code {
    return this.#module.local.get(number, this.#type);
  }
}

/** Bytes of a word that are stored together: bit `first` on, `count` of them with a meaning. */
interface Chunk {
  readonly bytes: 1 | 2 | 4;
  readonly first: number;
  readonly count: number;
}

function chunksOf(group: number, width: number): Chunk[] {
  const chunks: Chunk[] = [];
  for (let byte = 0; byte < group; ) {
    const bytes = group - byte >= 4 ? 4 : group - byte >= 2 ? 2 : 1;
    const first = byte * 8;
    chunks.push({ bytes, first, count: Math.min(bytes * 8, width - first) });
    byte += bytes;
  }
  return chunks;
}
