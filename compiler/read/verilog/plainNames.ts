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

  /** The name at an index. */
  name(index: number): NameId {
    return this.#columns.get(STRIDE * index);
  }

  /** Where the entry at an index starts, and where it ends. */
  start(index: number): Position {
    return this.#columns.get(STRIDE * index + 1);
  }

  end(index: number): Position {
    return this.#columns.get(STRIDE * index + 2);
  }

  /** Adds any declared name. */
  push(declared: DeclaredName): void {
    if (declared.dimensions.length > 0 || declared.value !== undefined) {
      this.#others ??= new Map();
      this.#others.set(this.length, declared);
    }
    this.pushPlain(declared.name, declared.start, declared.end);
  }

  /** The entry at an index, if it is more than a name. */
  other(index: number): DeclaredName | undefined {
    return this.#others?.get(index);
  }

  /** The entry at an index. */
  at(index: number): DeclaredName {
    const other = this.other(index);
    if (other !== undefined) return other;
    const place = { start: this.start(index), end: this.end(index) };
    return { name: this.name(index), dimensions: NO_DIMENSIONS, value: undefined, ...place };
  }

  *[Symbol.iterator](): Iterator<DeclaredName> {
    for (let index = 0; index < this.length; index++) yield this.at(index);
  }
}
