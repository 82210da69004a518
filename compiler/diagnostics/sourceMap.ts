import type { Source, Span } from './source.js';

/** A place in any of several sources: the source's base plus a byte offset. */
export type Position = number;

/** Numbers the bytes of several sources one after another, so that a place is one number. */
export class SourceMap {
  readonly sources: Source[] = [];
  readonly #bases: number[] = [];
  #end = 0;

  /** Sum of the lengths of all sources, with one more for each. */
  get length(): number {
    return this.#end;
  }

  /** Adds a source; returns the position of its first byte. */
  add(source: Source): Position {
    const base = this.#end;
    this.sources.push(source);
    this.#bases.push(base);
    this.#end += source.bytes.length + 1;
    return base;
  }

  /** Position of the first byte of `sources[index]`. */
  base(index: number): Position {
    return this.#bases[index]!;
  }

  /** Index into `sources` of a position. */
  indexOf(position: Position): number {
    let low = 0;
    let high = this.#bases.length - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.#bases[middle]! <= position) low = middle;
      else high = middle - 1;
    }
    return low;
  }

  /** Index into `sources` and byte offset of a position. */
  locate(position: Position): { index: number; offset: number } {
    const index = this.indexOf(position);
    return { index, offset: position - this.base(index) };
  }

  /** The span between two positions; where `end` is in another source, only its start is kept. */
  span(start: Position, end: Position = start): Span {
    const { index, offset } = this.locate(start);
    const source = this.sources[index]!;
    const length = end > start ? end - start : 0;
    const isInside = offset + length <= source.bytes.length;
    return { source, start: offset, end: isInside ? offset + length : offset };
  }
}
