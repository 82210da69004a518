import fc from 'fast-check';
import type { CircuitBuilder } from '../../compiler/circuit/builder.js';
import { Edge } from '../../compiler/circuit/circuit.js';
import { type NetId, NO_NET } from '../../compiler/circuit/ids.js';
import { addressBits, depthOf, type MemoryIndex } from '../../compiler/circuit/memory.js';

interface PortRecipe {
  readonly address: readonly number[];
  readonly isLate: boolean;
}

interface WriteRecipe {
  readonly clock: number;
  readonly edge: number;
  readonly enable: number | null;
  readonly address: readonly number[];
  readonly data: readonly number[];
  readonly mask: readonly number[] | null;
}

/** A memory of a random circuit; numbers choose nets. */
export interface MemoryRecipe {
  readonly width: number;
  readonly indices: readonly MemoryIndex[];
  /** Per bit 0, 1 or 2 for x; null where nothing is given. */
  readonly initial: readonly number[] | null;
  readonly reads: readonly PortRecipe[];
  readonly writes: readonly WriteRecipe[];
}

const MOST_BITS = 5;
const MOST_WIDTH = 11;

/** Small memories of one or two indices with up to two read and three write ports. */
export function memoryRecipe(pick: fc.Arbitrary<number>): fc.Arbitrary<MemoryRecipe> {
  const picks = (count: number) => fc.array(pick, { minLength: count, maxLength: count });
  const index = fc.record({
    low: fc.integer({ min: -3, max: 5 }),
    size: fc.integer({ min: 1, max: 6 }),
    spare: fc.nat(1),
  });
  const read = fc.record({ address: picks(2 * MOST_BITS), isLate: fc.boolean() });
  const write = fc.record({
    clock: pick,
    edge: fc.constantFrom(Edge.Rising, Edge.Falling),
    enable: fc.option(pick, { nil: null, freq: 4 }),
    address: picks(2 * MOST_BITS),
    data: picks(MOST_WIDTH),
    mask: fc.option(picks(MOST_WIDTH), { nil: null, freq: 2 }),
  });
  return fc.record({
    width: fc.integer({ min: 1, max: MOST_WIDTH }),
    indices: fc.array(index, { minLength: 1, maxLength: 2 }).map((all) =>
      all.map(({ low, size, spare }) => ({
        low,
        size,
        bits: Math.max(1, Math.ceil(Math.log2(size))) + spare,
      })),
    ),
    initial: fc.option(
      fc.array(fc.constantFrom(0, 1, 2), {
        minLength: 36 * MOST_WIDTH,
        maxLength: 36 * MOST_WIDTH,
      }),
      { nil: null },
    ),
    reads: fc.array(read, { minLength: 1, maxLength: 2 }),
    writes: fc.array(write, { maxLength: 3, size: 'max' }),
  });
}

/** The memories of a random circuit while it is built. */
export class MemoryBuilding {
  readonly #builder: CircuitBuilder;
  readonly #recipes: readonly MemoryRecipe[];
  readonly #numbers: readonly number[];

  constructor(builder: CircuitBuilder, recipes: readonly MemoryRecipe[]) {
    this.#builder = builder;
    this.#recipes = recipes;
    this.#numbers = recipes.map((recipe, i) =>
      builder.memory({
        name: `m${i}`,
        width: recipe.width,
        indices: recipe.indices,
        initial: initialOf(recipe),
        sourceIndex: 0,
        offset: 0,
      }),
    );
  }

  /** Adds the read ports of one kind; returns their data nets. */
  read(isLate: boolean, pick: (choice: number) => NetId, name: (name: string) => NetId): NetId[] {
    return this.#recipes.flatMap(({ width, indices, reads }, i) =>
      reads
        .filter((port) => port.isLate === isLate)
        .flatMap(({ address }, r) => {
          const data = Array.from({ length: width }, (_, bit) =>
            name(`r${i}_${r}${isLate ? 'l' : 'e'}${bit}`),
          );
          const nets = address.slice(0, addressBits(indices)).map(pick);
          this.#builder.readPort(this.#numbers[i]!, nets, data);
          return data;
        }),
    );
  }

  /** Adds the write ports. */
  write(pick: (choice: number) => NetId, clocks: readonly NetId[], isOneEdge: boolean): void {
    this.#recipes.forEach(({ width, indices, writes }, i) => {
      for (const { clock, edge, enable, address, data, mask } of writes) {
        this.#builder.writeMemory(this.#numbers[i]!, {
          clock: clocks[clock % clocks.length]!,
          edge: isOneEdge ? Edge.Rising : edge,
          enable: enable === null ? NO_NET : pick(enable),
          address: address.slice(0, addressBits(indices)).map(pick),
          data: data.slice(0, width).map(pick),
          ...(mask !== null && { mask: mask.slice(0, width).map(pick) }),
        });
      }
    });
  }
}

function initialOf({ width, indices, initial }: MemoryRecipe): Uint8Array | undefined {
  if (initial === null) return undefined;
  const group = Math.ceil(width / 8);
  const depth = depthOf(indices);
  const bytes = new Uint8Array(depth * 2 * group);
  for (let bit = 0; bit < depth * width; bit++) {
    const value = initial[bit % initial.length]!;
    const place = bit % width;
    const at = Math.floor(bit / width) * 2 * group + (place >>> 3) + (value === 2 ? group : 0);
    if (value !== 0) bytes[at]! |= 1 << (place & 7);
  }
  return bytes;
}
