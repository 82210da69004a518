import type { Hierarchy, LazyList, ModuleNames, Signal } from '../circuit/hierarchy.js';

/** Texts one after another, in UTF-8. */
export interface PackedTexts {
  readonly bytes: Uint8Array;
  /** Where each one ends. */
  readonly ends: Uint32Array;
}

/** The signals of a module, one entry of each array per signal. */
export interface PackedSignals {
  readonly names: PackedTexts;
  readonly msb: Int32Array;
  readonly lsb: Int32Array;
  readonly isVector: Uint8Array;
  readonly isSigned: Uint8Array;
  readonly offset: Uint32Array;
  readonly width: Uint32Array;
}

/** A hierarchy as plain data. */
export interface PackedHierarchy extends Omit<Hierarchy, 'modules' | 'scopeNames'> {
  readonly modules: readonly {
    readonly name: string;
    readonly bits: number;
    readonly signals: PackedSignals;
  }[];
  readonly scopeNames: PackedTexts;
}

/** Makes plain data of a hierarchy, whose names may be made when asked for only. */
export function packHierarchy({ modules, scopeNames, ...rest }: Hierarchy): PackedHierarchy {
  return {
    ...rest,
    scopeNames: packTexts(scopeNames),
    modules: modules.map(({ name, bits, signals }) => ({
      ...{ name, bits },
      signals: packSignals(signals),
    })),
  };
}

/** The hierarchy again; names are made when asked for. */
export function unpackHierarchy({ modules, scopeNames, ...rest }: PackedHierarchy): Hierarchy {
  return {
    ...rest,
    scopeNames: new TextList(scopeNames),
    modules: modules.map(
      ({ name, bits, signals }): ModuleNames => ({ name, bits, signals: new SignalList(signals) }),
    ),
  };
}

function packTexts(texts: LazyList<string>): PackedTexts {
  const encoder = new TextEncoder();
  const ends = new Uint32Array(texts.length);
  let bytes = new Uint8Array(16 * texts.length + 64);
  let end = 0;
  let index = 0;
  for (const text of texts) {
    // A character takes three bytes at most.
    if (end + 3 * text.length > bytes.length) {
      const grown = new Uint8Array(2 * bytes.length + 3 * text.length);
      grown.set(bytes.subarray(0, end));
      bytes = grown;
    }
    end += encoder.encodeInto(text, bytes.subarray(end)).written;
    ends[index++] = end;
  }
  return { bytes: bytes.slice(0, end), ends };
}

function packSignals(signals: LazyList<Signal>): PackedSignals {
  const count = signals.length;
  const names: string[] = [];
  const packed = {
    msb: new Int32Array(count),
    lsb: new Int32Array(count),
    isVector: new Uint8Array(count),
    isSigned: new Uint8Array(count),
    offset: new Uint32Array(count),
    width: new Uint32Array(count),
  };
  let index = 0;
  for (const { name, msb, lsb, isVector, isSigned, offset, width } of signals) {
    names.push(name);
    packed.msb[index] = msb;
    packed.lsb[index] = lsb;
    packed.isVector[index] = Number(isVector);
    packed.isSigned[index] = Number(isSigned ?? false);
    packed.offset[index] = offset;
    packed.width[index++] = width;
  }
  return { names: packTexts(names), ...packed };
}

/** A list that makes its entries when they are asked for. */
abstract class MadeList<T> implements LazyList<T> {
  abstract readonly length: number;

  at(index: number): T | undefined {
    return index >= 0 && index < this.length ? this.make(index) : undefined;
  }

  *[Symbol.iterator](): Iterator<T> {
    for (let index = 0; index < this.length; index++) yield this.make(index);
  }

  protected abstract make(index: number): T;
}

class TextList extends MadeList<string> {
  readonly length: number;
  readonly #texts: PackedTexts;
  readonly #decoder = new TextDecoder();

  constructor(texts: PackedTexts) {
    super();
    this.length = texts.ends.length;
    this.#texts = texts;
  }

  protected make(index: number): string {
    const { bytes, ends } = this.#texts;
    return this.#decoder.decode(bytes.subarray(index === 0 ? 0 : ends[index - 1], ends[index]));
  }
}

class SignalList extends MadeList<Signal> {
  readonly length: number;
  readonly #signals: PackedSignals;
  readonly #names: TextList;

  constructor(signals: PackedSignals) {
    super();
    this.length = signals.msb.length;
    this.#signals = signals;
    this.#names = new TextList(signals.names);
  }

  protected make(index: number): Signal {
    const { msb, lsb, isVector, isSigned, offset, width } = this.#signals;
    return {
      name: this.#names.at(index)!,
      msb: msb[index]!,
      lsb: lsb[index]!,
      isVector: isVector[index] === 1,
      ...(isSigned[index] === 1 && { isSigned: true }),
      offset: offset[index]!,
      width: width[index]!,
    };
  }
}
