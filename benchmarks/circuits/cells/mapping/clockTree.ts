import { cellName } from '../cell.js';
import { cellNamed } from '../library.js';
import type { PlacedCell } from './flipFlops.js';

/** How many pins hang on a leaf of a clock tree, at most. */
export const readersOfLeaf = 8;
const readersOfBranch = 3;

/** A cell of the tree, with its name and the names of its nets. */
export interface TreeCell {
  readonly cell: PlacedCell['cell'];
  readonly name: string;
  readonly pins: readonly (readonly [pin: string, net: string])[];
}

/** A tree of buffers between a clock and its readers. */
export class ClockTree {
  readonly cells: readonly TreeCell[];
  readonly #prefix: string;
  #readers = 0;

  /** A tree below the net `root`, for so many readers. `name` begins the names that it makes. */
  constructor(name: string, root: string, readers: number) {
    this.#prefix = name;
    const levels = [Math.ceil(readers / readersOfLeaf)];
    while (levels[0]! > readersOfBranch) levels.unshift(Math.ceil(levels[0]! / readersOfBranch));
    this.cells = levels.flatMap((count, level) =>
      Array.from({ length: count }, (_, i) => {
        const above = level === 0 ? root : this.#net(level - 1, Math.floor(i / readersOfBranch));
        const isLeaf = level === levels.length - 1;
        const output = isLeaf ? this.#leaf(i) : this.#net(level, i);
        return this.#stage(`${name}_${level}_${i}`, above, output, level === 1);
      }).flat(),
    );
  }

  /** The net that the next reader hangs on. */
  next(): string {
    return this.#leaf(Math.floor(this.#readers++ / readersOfLeaf));
  }

  /** A buffer, or two inverters one behind another. */
  #stage(name: string, input: string, output: string, isPair: boolean): TreeCell[] {
    if (!isPair) {
      const cell = cellNamed(cellName('clock_buffer', 4));
      return [
        {
          cell,
          name: `${name}_buffer`,
          pins: [
            ['a', input],
            ['y', output],
          ],
        },
      ];
    }
    const between = `${name}_low`;
    return [
      [`${name}_first`, input, between] as const,
      [`${name}_second`, between, output] as const,
    ].map(([own, from, to]) => {
      const cell = cellNamed(cellName('clock_inverter', 4));
      return {
        cell,
        name: own,
        pins: [
          ['a', from],
          ['y', to],
        ],
      };
    });
  }

  #net(level: number, i: number): string {
    return `${this.#prefix}_net_${level}_${i}`;
  }

  #leaf(i: number): string {
    return `${this.#prefix}_leaf_${i}`;
  }
}
