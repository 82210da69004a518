import { ALL, type Table, variables } from './functions.js';
import { eachTransformed, transformed, transforms } from './transforms.js';

/** A last operation by which a function can be computed: `left & right` or `left ^ right`. */
export interface Structure {
  readonly isXor: boolean;
  readonly left: Table;
  readonly right: Table;
  /** Whether the function is the inverse of that. */
  readonly inverted: boolean;
}

/** Functions that take more operations are not decomposed: hardly any saving is that large. */
const MOST_OPERATIONS = 5;
const TABLES = ALL + 1;
const UNKNOWN = 255;

/**
 * The ways to compute each function of four variables by the fewest ands and exclusive-ors of two
 * operands, inverted or not, found by trying all.
 *
 * Functions that become each other when variables are renamed, or they or the function inverted,
 * cost the same and form 222 classes; the search goes from class to class by growing cost (D. Knuth,
 * The Art of Computer Programming, volume 4A, section 7.1.2, "Boolean evaluation"). What a formula
 * computes twice counts twice.
 */
export class Structures {
  /** Per function, the number of its class, and how it is read from the first one of its class. */
  readonly #classOf = new Uint8Array(TABLES).fill(UNKNOWN);
  readonly #transformOf = new Uint16Array(TABLES);
  readonly #isInverse = new Uint8Array(TABLES);
  readonly #firsts: Table[] = [];
  /** Per class, the operations needed, `UNKNOWN` if too many. */
  readonly #costs: Uint8Array;
  /** By cost, the functions that no constant is among. */
  readonly #ofCost: Uint16Array[] = [];
  readonly #byClass = new Map<number, readonly Structure[]>();
  readonly #byTable = new Map<Table, readonly Structure[]>();

  constructor() {
    this.#findClasses();
    this.#costs = new Uint8Array(this.#firsts.length).fill(UNKNOWN);
    this.#costs[this.#classOf[variables[0]!]!] = 0;
    for (let cost = 1; cost <= MOST_OPERATIONS; cost++) this.#search(cost);
    this.#costs[this.#classOf[0]!] = 0;
  }

  /** The fewest operations of a formula for a function; undefined if there are too many. */
  cost(table: Table): number | undefined {
    const cost = this.#costs[this.#classOf[table]!]!;
    return cost === UNKNOWN ? undefined : cost;
  }

  /** The last operations of all shortest formulas for a function; none for a variable. */
  of(table: Table): readonly Structure[] {
    let known = this.#byTable.get(table);
    if (known === undefined) {
      const transform = transforms[this.#transformOf[table]!]!;
      known = this.#ofClass(this.#classOf[table]!).map(({ isXor, left, right, inverted }) => ({
        isXor,
        left: transformed(left, transform),
        right: transformed(right, transform),
        inverted: inverted !== (this.#isInverse[table] === 1),
      }));
      this.#byTable.set(table, known);
    }
    return known;
  }

  #findClasses(): void {
    for (let first = 0; first < TABLES; first++) {
      if (this.#classOf[first] !== UNKNOWN) continue;
      const number = this.#firsts.length;
      this.#firsts.push(first);
      eachTransformed(first, (table, transform) => {
        this.#enter(table, number, transform, 0);
        this.#enter(table ^ ALL, number, transform, 1);
      });
    }
  }

  #enter(table: Table, number: number, transform: number, inverse: number): void {
    if (this.#classOf[table] !== UNKNOWN) return;
    this.#classOf[table] = number;
    this.#transformOf[table] = transform;
    this.#isInverse[table] = inverse;
  }

  // One operand is the first of its class, the other any function: together they meet all classes.
  #search(cost: number): void {
    this.#ofCost.push(this.#tablesOfCost(cost - 1));
    const offer = (table: Table): void => {
      const number = this.#classOf[table]!;
      if (this.#costs[number]! > cost) this.#costs[number] = cost;
    };
    for (let less = 0; less * 2 < cost; less++) {
      const rights = this.#ofCost[cost - 1 - less]!;
      for (const [number, left] of this.#firsts.entries()) {
        if (this.#costs[number] !== less) continue;
        for (const right of rights) {
          offer(left & right);
          offer(~left & right);
          offer(left ^ right);
        }
      }
    }
  }

  #tablesOfCost(cost: number): Uint16Array {
    const tables = new Uint16Array(TABLES);
    let count = 0;
    for (let table = 0; table < TABLES; table++) {
      if (this.#costs[this.#classOf[table]!] === cost) tables[count++] = table;
    }
    return tables.slice(0, count);
  }

  #ofClass(number: number): readonly Structure[] {
    let known = this.#byClass.get(number);
    if (known === undefined) {
      const [table, cost] = [this.#firsts[number]!, this.#costs[number]!];
      known = cost === 0 || cost === UNKNOWN ? [] : this.#structuresOf(table, cost);
      this.#byClass.set(number, known);
    }
    return known;
  }

  #structuresOf(table: Table, cost: number): Structure[] {
    const found: Structure[] = [];
    for (let less = 0; less * 2 < cost; less++) {
      const more = cost - 1 - less;
      for (const left of this.#ofCost[less]!) {
        const other = table ^ left;
        if ((left & 1) === 0 && this.cost(other) === more && (less < more || left < other)) {
          found.push({ isXor: true, left, right: other, inverted: false });
        }
        for (const inverted of [false, true]) {
          const wanted = inverted ? table ^ ALL : table;
          if ((wanted & ~left) !== 0) continue;
          for (const right of this.#ofCost[more]!) {
            if ((left & right) !== wanted || (less === more && left > right)) continue;
            found.push({ isXor: false, left, right, inverted });
          }
        }
      }
    }
    return found;
  }
}
