import { type Literal, LogicOp, nodeOf } from '../../logic/logic.js';
import { stepOperands, VectorOp, type VectorStep } from '../../program/vectorCode.js';
import { NumberPlan } from './numberPlan.js';
import { isOneNode, LANES, lanesOf, NO_NODE, type Pack, type Packs, type Tuple } from './packs.js';
import type { Stages } from './units.js';

/** A vector as it is kept: the result of a step, inverted or not. */
export interface Vector {
  readonly step: number;
  readonly inverted: boolean;
}

/** Literals that scalar code stores in a lane slot, at the end of a stage. */
export interface PlannedGather {
  readonly slot: number;
  readonly stage: number;
  readonly literals: Literal[];
}

/** A step whose operand, of a splat, is a literal still. */
export interface PlannedStep extends VectorStep {
  readonly stage: number;
}

/**
 * A splat of an operation's result reads a lane; others read what stands in memory anyway, a state
 * bit that is in no pack among them, which must not be kept inverted then.
 */
export type SplatSource = { readonly literal: Literal } | { readonly lane: number };

const NONE: readonly number[] = [];

const EVERY_LANE: readonly number[] = new Array<number>(LANES).fill(1);

/**
 * Plans the vector steps that compute packs and bring tuples of literals together.
 *
 * An and-pack whose operands are both kept inverted is kept inverted itself, as an or (De Morgan);
 * others take the polarity that falls out of their operands.
 */
export class VectorPlan {
  readonly steps: PlannedStep[] = [];
  readonly gathers: PlannedGather[] = [];
  /** Per splat step, what it spreads. */
  readonly splats = new Map<number, SplatSource>();
  slotCount = 0;
  readonly #packs: Packs;
  readonly #stages: Stages;
  readonly #placeOf: ReadonlyMap<number, number>;
  readonly #numbers: NumberPlan;
  readonly #ofPack: (Vector | undefined)[] = [];
  readonly #known = new Map<string, number>();
  readonly #splatLanes = new Map<number, { gather: PlannedGather; used: number }>();

  /** `placeOf` tells where the bits of packs of state bits stand. */
  constructor(packs: Packs, stages: Stages, placeOf: ReadonlyMap<number, number>) {
    this.#packs = packs;
    this.#stages = stages;
    this.#placeOf = placeOf;
    this.#numbers = new NumberPlan(this, packs);
  }

  /** The vector of a pack whose operands have been planned before. */
  ofPack(number: number): Vector {
    this.#ofPack[number] ??= this.#planned(number, this.#packs.get(number)!);
    return this.#ofPack[number];
  }

  /** Whole bytes, of which the literals of each tuple, the lowest first, are a bit. */
  stacked(tuples: readonly Tuple[]): number {
    const bits = tuples.map((tuple) => {
      const { step, inverted } = this.together(tuple);
      return inverted ? this.step(VectorOp.Invert, step, 0, 0, EVERY_LANE) : step;
    });
    return bits.reduceRight((higher, bit) => this.step(VectorOp.Stack, higher, bit));
  }

  /** A new lane slot. */
  newSlot(): number {
    return this.slotCount++;
  }

  /** Whether a tuple needs any vector, rather than bits that scalar code could store one by one. */
  needsVectors(tuple: Tuple): boolean {
    return [...lanesOf(tuple)].some(([, literal]) => this.#packs.isPacked(nodeOf(literal)));
  }

  /** The literals of a tuple side by side. */
  together(tuple: Tuple): Vector {
    const isOne = isOneNode(tuple);
    const inversions = tuple.map((literal) => (literal < 0 ? -1 : this.#inversion(literal, isOne)));
    const counted = inversions.filter((inversion) => inversion >= 0);
    const step = this.#arranged(tuple);
    if (counted.every((inversion) => inversion === 0)) return { step, inverted: false };
    if (counted.every((inversion) => inversion === 1)) return { step, inverted: true };
    const lanes = inversions.map((inversion) => Number(inversion === 1));
    return { step: this.step(VectorOp.Invert, step, 0, 0, lanes), inverted: false };
  }

  #planned(number: number, pack: Pack): Vector {
    if (pack.sum !== undefined) return this.#numbers.bitsOf(pack.sum.addition, pack.sum.first);
    if (pack.op === LogicOp.State) {
      return { step: this.step(VectorOp.State, this.#placeOf.get(number)!), inverted: false };
    }
    const [a, b, c] = pack.operands.map((tuple) => this.together(tuple));
    if (pack.op === LogicOp.Xor) {
      return {
        step: this.step(VectorOp.Xor, a!.step, b!.step),
        inverted: a!.inverted !== b!.inverted,
      };
    }
    return pack.op === LogicOp.And ? this.#and(a!, b!) : this.#mux(a!, b!, c!);
  }

  #and(a: Vector, b: Vector): Vector {
    if (a.inverted && b.inverted) {
      return { step: this.step(VectorOp.Or, a.step, b.step), inverted: true };
    }
    if (a.inverted) return { step: this.step(VectorOp.AndNot, b.step, a.step), inverted: false };
    const op = b.inverted ? VectorOp.AndNot : VectorOp.And;
    return { step: this.step(op, a.step, b.step), inverted: false };
  }

  #mux(select: Vector, zero: Vector, one: Vector): Vector {
    const [low, high] = select.inverted ? [one, zero] : [zero, one];
    const turned =
      low.inverted === high.inverted
        ? high.step
        : this.step(VectorOp.Invert, high.step, 0, 0, EVERY_LANE);
    return {
      step: this.step(VectorOp.Mux, select.step, low.step, turned),
      inverted: low.inverted,
    };
  }

  // Whether a literal is the inverse of what its lane holds. Scalar code stores literals as they are.
  #inversion(literal: Literal, isOne: boolean): number {
    const node = nodeOf(literal);
    const pack = this.#packs.packOf[node]!;
    if (pack >= 0) return (literal & 1) ^ Number(this.ofPack(pack).inverted);
    const op = this.#packs.logic.op[node]!;
    const isStored = op >= LogicOp.And || (op === LogicOp.State && !isOne);
    return isStored ? 0 : literal & 1;
  }

  // The nodes of a tuple side by side, inverted or not.
  #arranged(tuple: Tuple): number {
    if (isOneNode(tuple)) {
      const single = this.#splat(tuple);
      if (single !== undefined) return single;
    }
    return this.joined(this.#sourcesOf(tuple));
  }

  /** A vector with lanes of others. */
  joined(sources: readonly Source[]): number {
    const [first, second] = sources;
    if (first === undefined) throw new Error('a tuple without lanes');
    if (second === undefined) {
      const isInPlace = first.from.every((lane, to) => lane < 0 || lane === to);
      if (isInPlace) return first.step;
      return this.step(VectorOp.Shuffle, first.step, first.step, 0, first.from);
    }
    let joined = this.#join(first.step, first.from, second);
    const filled = first.from.map((lane, to) => (lane >= 0 || second.from[to]! >= 0 ? to : -1));
    for (const source of sources.slice(2)) {
      joined = this.#join(joined, filled, source);
      for (const [to, lane] of source.from.entries()) if (lane >= 0) filled[to] = to;
    }
    return joined;
  }

  #join(step: number, from: readonly number[], source: Source): number {
    const lanes = from.map((lane, to) => (source.from[to]! >= 0 ? LANES + source.from[to]! : lane));
    return this.step(VectorOp.Shuffle, step, source.step, 0, lanes);
  }

  #splat(tuple: Tuple): number | undefined {
    const literals = [...lanesOf(tuple)].map(([, literal]) => literal);
    const literal = literals[0]!;
    const node = nodeOf(literal);
    if (this.#packs.isPacked(node)) return undefined;
    const op = this.#packs.logic.op[node]!;
    const isStored = op >= LogicOp.And;
    // Lanes in both polarities of one stored bit: gather them.
    if (isStored && literals.some((other) => other !== literal)) return undefined;
    const key = `splat ${isStored ? literal : node}`;
    const known = this.#known.get(key);
    if (known !== undefined) return known;
    const stage = this.#stages.ofNode[node]!;
    const source = isStored ? { lane: this.#splatLane(literal, stage) } : { literal: node * 2 };
    const step = this.steps.push({ ...EMPTY, op: VectorOp.Splat, stage }) - 1;
    this.splats.set(step, source);
    this.#known.set(key, step);
    return step;
  }

  // Bits to be spread share slots, those of each stage apart.
  #splatLane(literal: Literal, stage: number): number {
    let open = this.#splatLanes.get(stage);
    if (open === undefined || open.used === LANES) {
      const literals = new Array<number>(LANES).fill(-1);
      open = { gather: { slot: this.newSlot(), stage, literals }, used: 0 };
      this.gathers.push(open.gather);
      this.#splatLanes.set(stage, open);
    }
    open.gather.literals[open.used] = literal;
    return open.gather.slot * LANES + open.used++;
  }

  #sourcesOf(tuple: Tuple): Source[] {
    const { logic, packOf, laneOf } = this.#packs;
    const sources = new Map<number, number[]>();
    for (const [lane, literal] of lanesOf(tuple)) {
      const node = nodeOf(literal);
      const pack = packOf[node]!;
      const isInput = logic.op[node] === LogicOp.Input;
      const source = pack >= 0 ? pack : node === 0 ? ZEROS : isInput ? INPUTS : STORED;
      const from = sources.get(source) ?? new Array<number>(LANES).fill(NO_NODE);
      from[lane] = pack >= 0 ? laneOf[node]! : lane;
      sources.set(source, from);
    }
    return [...sources].map(([source, from]) => ({
      step: this.#source(source, from, tuple),
      from,
    }));
  }

  #source(source: number, from: readonly number[], tuple: Tuple): number {
    if (source >= 0) return this.ofPack(source).step;
    const literals = tuple.map((literal, lane) => (from[lane]! >= 0 ? literal : -1));
    if (source === ZEROS) return this.#splat(literals)!;
    if (source === INPUTS) {
      const { a } = this.#packs.logic;
      const bits = literals.map((literal) => (literal < 0 ? -1 : a[nodeOf(literal)]!));
      return this.#inputs(bits);
    }
    return this.#gathered(literals);
  }

  // Bits of one place in their bytes are read from the same bytes as those of others.
  #inputs(bits: readonly number[]): number {
    const bytes = bits.map((bit) => (bit < 0 ? -1 : bit >>> 3));
    const step = this.step(VectorOp.RowBytes, 0, 0, 0, bytes);
    const places = bits.map((bit) => (bit < 0 ? -1 : bit & 7));
    return places.every((place) => place <= 0)
      ? step
      : this.step(VectorOp.Pick, step, 0, 0, places);
  }

  #gathered(literals: Literal[]): number {
    const key = `gather ${literals.join()}`;
    const known = this.#known.get(key);
    if (known !== undefined) return known;
    const stage = Math.max(
      ...literals.map((literal) => (literal < 0 ? 0 : this.#stages.ofNode[nodeOf(literal)]!)),
    );
    const gather = { slot: this.newSlot(), stage, literals };
    this.gathers.push(gather);
    const step = this.steps.push({ ...EMPTY, op: VectorOp.Slot, a: gather.slot, stage }) - 1;
    this.#known.set(key, step);
    return step;
  }

  /** The nodes of a tuple side by side as they are kept, and which of its literals are inverse to that. */
  kept(tuple: Tuple): { step: number; inversions: number[] } {
    const isOne = isOneNode(tuple);
    const inversions = tuple.map((literal) => (literal < 0 ? 0 : this.#inversion(literal, isOne)));
    return { step: this.#arranged(tuple), inversions };
  }

  /** A step, made once. */
  step(op: number, a: number, b = 0, c = 0, lanes: readonly number[] = NONE): number {
    const key = `${op} ${a} ${b} ${c} ${lanes.join()}`;
    const known = this.#known.get(key);
    if (known !== undefined) return known;
    const operands = [a, b, c].slice(0, stepOperands[op]);
    const stage = Math.max(0, ...operands.map((operand) => this.steps[operand]!.stage));
    const step = this.steps.push({ op, a, b, c, lanes, stage }) - 1;
    this.#known.set(key, step);
    return step;
  }
}

/** Sixteen lanes that are taken from one vector: per lane the lane there, or -1. */
export interface Source {
  readonly step: number;
  readonly from: readonly number[];
}

// Sources that are no packs.
const ZEROS = -1;
const INPUTS = -2;
const STORED = -3;

const EMPTY = { op: 0, a: 0, b: 0, c: 0, lanes: NONE };
