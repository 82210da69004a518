import { GrowableUint32 } from './growable.js';
import { type NetId, netId } from './ids.js';

/**
 * How strongly a value is driven; the greater one wins (IEEE 1364-2005, clause 7.9). The three
 * below `Pull` that are no drive strengths are those of stored charge.
 */
export const Strength = {
  HighZ: 0,
  Small: 1,
  Medium: 2,
  Weak: 3,
  Large: 4,
  Pull: 5,
  Strong: 6,
  Supply: 7,
} as const;

/** One of the numbers in the table `Strength`. */
export type Strength = (typeof Strength)[keyof typeof Strength];

/** How the drivers of a net are resolved, and what it is while none drives (clause 4.6). */
export const NetType = {
  Plain: 0,
  /** `wand`, `triand`. */
  And: 1,
  /** `wor`, `trior`. */
  Or: 2,
  /** `tri0`. */
  Pull0: 3,
  /** `tri1`. */
  Pull1: 4,
  /** `trireg`: keeps the value that it had last. */
  Charge: 5,
} as const;

/** One of the numbers in the table `NetType`. */
export type NetType = (typeof NetType)[keyof typeof NetType];

/**
 * The type of a net that a port makes of two (clause 12.3.9.3): the one outside decides, unless it
 * says nothing, or is `trireg` and the one inside pulls.
 */
export function joinedType(outside: NetType, inside: NetType): NetType {
  const isPull = inside === NetType.Pull0 || inside === NetType.Pull1;
  const insideDecides = outside === NetType.Plain || (outside === NetType.Charge && isPull);
  return insideDecides ? inside : outside;
}

/** The kinds of things that drive a bus part of the time, or not with full strength. */
export const PartKind = {
  /** Drives the value of `data` while `control` is 1. */
  Driver: 0,
  /** A driver that does not drive either while nothing drives `data`, as a copied z. */
  Copy: 1,
  /** Lets the drivers of `data` through, with their strengths, while `control` is 1 (clause 7.7). */
  Switch: 2,
  /** A switch of which it is open which side drives the other one (clause 7.6). */
  TwoWay: 3,
} as const;

/** What a part of a bus does beside its nets. */
export interface PartTraits {
  /** A `PartKind`. */
  readonly kind: number;
  /** With which a driver or copy drives 0 and 1; default strong. `HighZ`: it does not. */
  readonly zero?: Strength;
  readonly one?: Strength;
  /** Whether a switch reduces strengths (`rnmos` and its like). */
  readonly isResistive?: boolean;
  /**
   * Whether a driver or copy stands for a conditional operator with z in one branch: while `control`
   * is x it drives x (IEEE 1364-2005, clause 5.1.13), where a `bufif1` may be z (clause 7.4).
   */
  readonly isConditional?: boolean;
}

const RESISTIVE = 1 << 12;
const CONDITIONAL = 1 << 13;

/** Traits as one number. */
export function packTraits(traits: PartTraits): number {
  const { kind, zero, one, isResistive, isConditional } = traits;
  const strengths = ((zero ?? Strength.Strong) << 4) | ((one ?? Strength.Strong) << 8);
  return kind | strengths | (isResistive ? RESISTIVE : 0) | (isConditional ? CONDITIONAL : 0);
}

/** The traits that `packTraits` has packed. */
export const unpackTraits = (packed: number): Required<PartTraits> => ({
  kind: packed & 15,
  zero: ((packed >> 4) & 15) as Strength,
  one: ((packed >> 8) & 15) as Strength,
  isResistive: (packed & RESISTIVE) !== 0,
  isConditional: (packed & CONDITIONAL) !== 0,
});

/** Whether what drives with these traits is weaker than a gate, whatever its value: a pull. */
export function isWeak(packed: number): boolean {
  const { kind, zero, one } = unpackTraits(packed);
  return kind <= PartKind.Copy && Math.max(zero, one) < Strength.Strong;
}

/** One of the things that drive a bus. */
export interface BusPart extends Required<PartTraits> {
  readonly net: NetId;
  readonly data: NetId;
  /** `NO_NET` for always. */
  readonly control: NetId;
  /** Its place: index of a source, and byte offset in it. */
  readonly sourceIndex: number;
  readonly offset: number;
}

const RECORD = 6;

/** The parts of all buses of a circuit, in the order in which they were added. */
export class BusParts {
  readonly #records = new GrowableUint32(RECORD);

  get count(): number {
    return this.#records.length / RECORD;
  }

  add(part: Pick<BusPart, 'net' | 'data' | 'control' | 'sourceIndex' | 'offset'>, traits: number) {
    this.#records.push(part.net);
    this.#records.push(part.data);
    this.#records.push(part.control);
    this.#records.push(part.sourceIndex);
    this.#records.push(part.offset);
    this.#records.push(traits);
  }

  at(index: number): BusPart {
    const field = (place: number): number => this.#records.get(index * RECORD + place);
    return {
      net: netId(field(0)),
      data: netId(field(1)),
      control: netId(field(2)),
      sourceIndex: field(3),
      offset: field(4),
      ...unpackTraits(field(5)),
    };
  }
}
