import { FALSE, type Literal, nodeOf } from '../../logic/logic.js';
import { VectorOp } from '../../program/vectorCode.js';
import type { Addition } from '../additions/addition.js';
import { chunksOf, LANES, type Packs, type Tuple } from './packs.js';

/** What number steps need of the plan that they are part of. */
interface Steps {
  step(op: number, a: number, b?: number, c?: number, lanes?: readonly number[]): number;
  kept(tuple: Tuple): { step: number; inversions: number[] };
}

/** Bytes of a vector each twice: the lower eight, or the upper ones. */
const LOWER = Array.from({ length: LANES }, (_, lane) => lane >> 1);
const UPPER = LOWER.map((lane) => lane + LANES / 2);

const BIT_OF_BYTE = Array.from({ length: LANES }, (_, lane) => lane % 8);

/** Plans additions: from lanes to numbers, and back where bits of a sum are read. */
export class NumberPlan {
  readonly #steps: Steps;
  readonly #packs: Packs;
  readonly #sums: (number | undefined)[] = [];

  constructor(steps: Steps, packs: Packs) {
    this.#steps = steps;
    this.#packs = packs;
  }

  /** The vector of sixteen bits of a sum, from `first` on. */
  bitsOf(addition: number, first: number): { step: number; inverted: boolean } {
    const literals = this.#packs.additions[addition]!.sum.slice(first, first + LANES);
    const read = literals.filter((literal) => literal >= 0);
    const inverted = read.every((literal) => (literal & 1) === 1);
    const turned = literals.map((literal) => (literal >= 0 && !inverted ? literal & 1 : 0));
    const number = this.#flipped(this.#sum(addition), [
      ...new Array<number>(first).fill(0),
      ...turned,
    ]);
    const bytes = this.#steps.step(VectorOp.Bytes, number);
    // Bytes 2c and 2c + 1, eight times each, are what lanes of chunk c take their bits from.
    const chunk = first / LANES;
    const twice = this.#shuffled(bytes, LOWER);
    const fourfold = this.#shuffled(twice, chunk < 2 ? LOWER : UPPER);
    const spread = this.#shuffled(fourfold, chunk % 2 === 0 ? LOWER : UPPER);
    return { step: this.#steps.step(VectorOp.Pick, spread, 0, 0, BIT_OF_BYTE), inverted };
  }

  #shuffled(step: number, lanes: readonly number[]): number {
    return this.#steps.step(VectorOp.Shuffle, step, step, 0, lanes);
  }

  #sum(number: number): number {
    this.#sums[number] ??= this.#added(this.#packs.additions[number]!);
    return this.#sums[number];
  }

  #added(addition: Addition): number {
    const { words, constant, width } = addition;
    const terms = words.map((word) => this.#word(word, width));
    if (constant !== 0n) terms.push(this.#constant(constant));
    return terms.reduce((sum, term) => this.#steps.step(VectorOp.Add, sum, term));
  }

  // Bits above the width may be anything.
  #word(word: readonly Literal[], width: number): number {
    const { number, inversions, isClean } = this.#ofSum(word) ?? this.#ofLanes(word, width);
    const isThere = word.map((literal) => Number(literal !== FALSE));
    return this.#flipped(isClean ? number : this.#masked(number, isThere), inversions);
  }

  // Where all bits are those of another sum, in order, that is the number.
  #ofSum(word: readonly Literal[]): NumberWord | undefined {
    const from = sumOfWord(this.#packs, word);
    if (from === undefined) return undefined;
    const { addition, shift } = from;
    const { sum } = this.#packs.additions[addition]!;
    const inversions = word.map((literal, column) =>
      literal === FALSE ? 0 : (literal ^ sum[column - shift]!) & 1,
    );
    const number = this.#shifted(this.#sum(addition), shift);
    return { number, inversions, isClean: !word.includes(FALSE) };
  }

  #ofLanes(word: readonly Literal[], width: number): NumberWord {
    const inversions: number[] = [];
    let number: number | undefined;
    for (const [chunk, tuple] of chunksOf(word, width).entries()) {
      if (tuple.every((literal) => literal < 0)) {
        inversions.push(...new Array<number>(LANES).fill(0));
        continue;
      }
      const kept = this.#steps.kept(tuple);
      inversions.push(...kept.inversions);
      const part = this.#shifted(this.#steps.step(VectorOp.Number, kept.step), chunk * LANES);
      number = number === undefined ? part : this.#steps.step(VectorOp.Join, number, part);
    }
    return { number: number!, inversions, isClean: isFilled(word, width) };
  }

  #shifted(number: number, bits: number): number {
    return bits === 0 ? number : this.#steps.step(VectorOp.Shift, number, 0, 0, [bits]);
  }

  #masked(number: number, bits: readonly number[]): number {
    return this.#steps.step(VectorOp.Mask, number, this.#constant(numberOf(bits)));
  }

  #flipped(number: number, bits: readonly number[]): number {
    if (!bits.includes(1)) return number;
    return this.#steps.step(VectorOp.Flip, number, this.#constant(numberOf(bits)));
  }

  #constant(value: bigint): number {
    const sixteens = [0n, 16n, 32n, 48n].map((at) => Number((value >> at) & 0xffffn));
    return this.#steps.step(VectorOp.Constant, 0, 0, 0, sixteens);
  }
}

/** The addition whose sum has all bits of a word, in order, and how many bits lower; if there is one. */
export function sumOfWord(
  packs: Packs,
  word: readonly Literal[],
): { addition: number; shift: number } | undefined {
  let from: { addition: number; shift: number } | undefined;
  for (const [column, literal] of word.entries()) {
    if (literal === FALSE) continue;
    const { sum } = packs.get(packs.packOf[nodeOf(literal)]!) ?? {};
    if (sum === undefined) return undefined;
    const { addition, first } = sum;
    const shift = column - first - packs.laneOf[nodeOf(literal)]!;
    from ??= { addition, shift };
    if (from.addition !== addition || from.shift !== shift) return undefined;
  }
  return from;
}

/** A number before bits of it are inverted; clean if it has no 1 where the word has no bit. */
interface NumberWord {
  readonly number: number;
  readonly inversions: number[];
  readonly isClean: boolean;
}

/** Whether chunks of which a word has any bits have all that count. */
export function isFilled(word: readonly Literal[], width: number): boolean {
  return chunksOf(word, width).every(
    (tuple, chunk) =>
      tuple.every((literal) => literal < 0) ||
      tuple.every((literal, lane) => literal >= 0 || chunk * LANES + lane >= width),
  );
}

const numberOf = (bits: readonly number[]): bigint =>
  bits.reduceRight((number, bit) => number * 2n + BigInt(bit), 0n);
