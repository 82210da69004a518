import { GrowableUint32 } from '../../circuit/growable.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { NameId } from '../names.js';
import type { DeclaredName, RangeSyntax } from './syntax.js';

const NO_DIMENSIONS: readonly RangeSyntax[] = [];

// Name, start and end of one entry.
const STRIDE = 3;

/**
 * Declared names in columns, since a flat netlist may declare a million wires: twelve bytes for
 * each that is a name alone. Objects are made while they are gone over.
 */
export class PlainNames implements Iterable<DeclaredName> {
  readonly #columns = new GrowableUint32(4 * STRIDE);
  #others: Map<number, DeclaredName> | undefined;

  get length(): number {
    return this.#columns.length / STRIDE;
  }

  /** Adds a name without dimensions and value. */
  pushPlain(name: NameId, start: Position, end: Position): void {
    this.#columns.pushThree(name, start, end);
  }

  /** Lets other lists use the memory of this one, which becomes empty. */
  release(): void {
    this.#columns.release();
  }

  /** Adds any declared name. */
  push(declared: DeclaredName): void {
    if (declared.dimensions.length > 0 || declared.value !== undefined) {
      this.#others ??= new Map();
      this.#others.set(this.length, declared);
    }
    this.pushPlain(declared.name, declared.start, declared.end);
  }

  /** Calls `plain` for each name alone and `other` for each that has more, in their order. */
  forEach(
    plain: (name: NameId, start: Position, end: Position) => void,
    other: (declared: DeclaredName) => void,
  ): void {
    const columns = this.#columns;
    for (let i = 0; i < columns.length; i += STRIDE) {
      const more = this.#others?.get(i / STRIDE);
      if (more !== undefined) other(more);
      else plain(columns.get(i), columns.get(i + 1), columns.get(i + 2));
    }
  }

  *[Symbol.iterator](): Iterator<DeclaredName> {
    const columns = this.#columns;
    for (let i = 0; i < columns.length; i += STRIDE) {
      const other = this.#others?.get(i / STRIDE);
      yield other ?? {
        name: columns.get(i),
        dimensions: NO_DIMENSIONS,
        value: undefined,
        start: columns.get(i + 1),
        end: columns.get(i + 2),
      };
    }
  }
}
