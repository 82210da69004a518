import fc from 'fast-check';

/** A choice among what is there, taken modulo its number. */
export type Pick = number;

/** A stretch of a signal, from a bit on. */
export interface PieceRecipe {
  readonly signal: Pick;
  readonly low: number;
}

/** Width and declared range of a signal. */
export interface ShapeRecipe {
  readonly width: number;
  readonly lsb: number;
  readonly isAscending: boolean;
  readonly isVector: boolean;
  readonly style: Pick;
}

/** A signal that is worked out of others, or an instance of a module. */
export interface WordRecipe {
  readonly operator: Pick;
  readonly shape: ShapeRecipe;
  readonly pieces: readonly PieceRecipe[];
  readonly value: number;
  /** An instance in place of an operation, where the value allows it. */
  readonly isInstance: boolean;
}

/** A register; what is null it does not have. */
export interface RegisterRecipe {
  readonly shape: ShapeRecipe;
  readonly data: PieceRecipe;
  readonly isFalling: boolean;
  readonly enable: PieceRecipe | null;
  readonly clear: { readonly by: PieceRecipe; readonly value: number } | null;
  /** Asynchronous, the first one with priority. */
  readonly controls: readonly { readonly isLow: boolean; readonly value: number }[];
  readonly initial: number | null;
  readonly isPort: boolean;
}

/** A latch that is open while the clock is at a level. */
export interface LatchRecipe {
  readonly shape: ShapeRecipe;
  readonly data: PieceRecipe;
  readonly level: 0 | 1;
}

export interface ModuleRecipe {
  readonly inputs: readonly ShapeRecipe[];
  readonly parameter: number;
  readonly registers: readonly RegisterRecipe[];
  readonly words: readonly WordRecipe[];
  readonly latches: readonly LatchRecipe[];
  /** Gates and the like behind the latches. */
  readonly laterWords: readonly WordRecipe[];
  readonly outputs: readonly { readonly shape: ShapeRecipe; readonly source: PieceRecipe }[];
}

/** Modules, each of which may hold instances of those before it; the last one is the top. */
export type DesignRecipe = readonly ModuleRecipe[];

const piece = fc.record({ signal: fc.nat(40), low: fc.nat(5) });

const shape: fc.Arbitrary<ShapeRecipe> = fc
  .record({
    width: fc.integer({ min: 1, max: 6 }),
    lsb: fc.integer({ min: -2, max: 3 }),
    isAscending: fc.boolean(),
    isVector: fc.boolean(),
    style: fc.nat(7),
  })
  .map((made) => (made.width > 1 ? { ...made, isVector: true } : made));

const word: fc.Arbitrary<WordRecipe> = fc.record({
  operator: fc.nat(200),
  shape,
  pieces: fc.array(piece, { minLength: 4, maxLength: 4 }),
  value: fc.nat(255),
  isInstance: fc.oneof(
    { weight: 4, arbitrary: fc.constant(false) },
    { weight: 1, arbitrary: fc.constant(true) },
  ),
});

const register: fc.Arbitrary<RegisterRecipe> = fc.record({
  shape,
  data: piece,
  isFalling: fc.boolean(),
  enable: fc.option(piece, { freq: 1 }),
  clear: fc.option(fc.record({ by: piece, value: fc.nat(63) }), { freq: 1 }),
  controls: fc.array(fc.record({ isLow: fc.boolean(), value: fc.nat(63) }), { maxLength: 2 }),
  initial: fc.option(fc.nat(63), { freq: 1 }),
  isPort: fc.boolean(),
});

const latch: fc.Arbitrary<LatchRecipe> = fc.record({
  shape,
  data: piece,
  level: fc.constantFrom(0, 1),
});

const module: fc.Arbitrary<ModuleRecipe> = fc.record({
  inputs: fc.array(shape, { maxLength: 3 }),
  parameter: fc.nat(15),
  registers: fc.array(register, { maxLength: 3, size: 'max' }),
  words: fc.array(word, { maxLength: 10, size: 'max' }),
  latches: fc.array(latch, { maxLength: 1 }),
  laterWords: fc.array(word, { maxLength: 2 }),
  outputs: fc.array(fc.record({ shape, source: piece }), { minLength: 1, maxLength: 3 }),
});

/** Random designs; they shrink towards one module with one output. */
export const designRecipe: fc.Arbitrary<DesignRecipe> = fc.array(module, {
  minLength: 1,
  maxLength: 3,
  size: 'max',
});
