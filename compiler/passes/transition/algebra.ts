import { FALSE, type Literal, TRUE } from '../../logic/logic.js';
import type { LogicBuilder } from '../../logic/logicBuilder.js';
import { Prover } from '../../logic/prover.js';

/** A net's value as logic: one literal, or two in three-valued models, packed in one number. */
export type NetValue = number;

/** Stands where there is no value. */
export const NO_VALUE: NetValue = -1;

/** How the value of a net is computed in a logic graph: with two values or with three. */
export interface Algebra {
  readonly zero: NetValue;
  readonly one: NetValue;
  readonly unknown: NetValue;
  not(a: NetValue): NetValue;
  and(a: NetValue, b: NetValue): NetValue;
  or(a: NetValue, b: NetValue): NetValue;
  xor(a: NetValue, b: NetValue): NetValue;
  /** Whether x is a value of its own. */
  readonly hasUnknown: boolean;
  /** The conditional operator: where the select is x, equal data stay and others become x. */
  mux(select: NetValue, zero: NetValue, one: NetValue): NetValue;
  /** One of three: what stands for x is taken where the select is x. */
  pick(select: NetValue, zero: NetValue, one: NetValue, unknown: NetValue): NetValue;
  /** Whether a value can be x, as far as its form tells. */
  mayBeUnknown(a: NetValue): boolean;
  /** 1 where two values are not the same, x included, and 0 where they are. */
  differs(a: NetValue, b: NetValue): NetValue;
  /** Both where they are the same, and x elsewhere. */
  merge(a: NetValue, b: NetValue): NetValue;
  /** Whether two values are proven to be the same whatever the inputs and the state are. */
  areSame(a: NetValue, b: NetValue): boolean;
}

/** Values 0 and 1. A constant x is taken as 0. */
export function twoValued(logic: LogicBuilder, prover = new Prover(logic)): Algebra {
  return {
    zero: FALSE,
    one: TRUE,
    unknown: FALSE,
    hasUnknown: false,
    not: (a) => a ^ 1,
    and: (a, b) => logic.and(a, b),
    or: (a, b) => logic.or(a, b),
    xor: (a, b) => logic.xor(a, b),
    mux: (select, zero, one) => logic.mux(select, zero, one),
    pick: (select, zero, one) => logic.mux(select, zero, one),
    mayBeUnknown: () => false,
    differs: (a, b) => logic.xor(a, b),
    merge: (a, b) => logic.and(a, b),
    areSame: (a, b) => prover.areEqual(a, b),
  };
}

// Two literals below 2^26 fit a double's 53 bits.
const SHIFT = 0x4000000;

/** Packs "may be 1" and "may be 0" into one value. */
export const pair = (mayBeOne: Literal, mayBeZero: Literal): NetValue =>
  mayBeOne * SHIFT + mayBeZero;
export const mayBeOne = (value: NetValue): Literal => Math.floor(value / SHIFT);
export const mayBeZero = (value: NetValue): Literal => value % SHIFT;

/**
 * Values 0, 1 and x, each as two bits "may be 1" and "may be 0"; x is both.
 *
 * Every rule is a Boolean function of those bits and equals the gate tables of IEEE 1364-2005,
 * 7.2 to 7.4 (with z read as x) and, for the multiplexer, the conditional operator of 5.1.13, so
 * that whatever a Boolean simplification does to them afterwards stays exact for x.
 */
export function threeValued(logic: LogicBuilder, prover = new Prover(logic)): Algebra {
  const not = (a: NetValue): NetValue => pair(mayBeZero(a), mayBeOne(a));
  const and = (a: NetValue, b: NetValue): NetValue =>
    pair(logic.and(mayBeOne(a), mayBeOne(b)), logic.or(mayBeZero(a), mayBeZero(b)));
  const mux = (select: NetValue, zero: NetValue, one: NetValue): NetValue => {
    const either = (forZero: Literal, forOne: Literal): Literal =>
      logic.or(logic.and(mayBeZero(select), forZero), logic.and(mayBeOne(select), forOne));
    return pair(either(mayBeOne(zero), mayBeOne(one)), either(mayBeZero(zero), mayBeZero(one)));
  };
  return {
    zero: pair(FALSE, TRUE),
    one: pair(TRUE, FALSE),
    unknown: pair(TRUE, TRUE),
    hasUnknown: true,
    not,
    and,
    or: (a, b) => not(and(not(a), not(b))),
    xor: (a, b) => mux(a, b, not(b)),
    mux,
    pick: (select, zero, one, unknown) => {
      // Each of the select's two bits alone tells one of its known values from all others.
      const picked = (forZero: Literal, forOne: Literal, forX: Literal): Literal => {
        if (forX === forOne) return logic.mux(mayBeOne(select), forZero, forOne);
        if (forX === forZero) return logic.mux(mayBeZero(select), forOne, forZero);
        const isUnknown = logic.and(mayBeOne(select), mayBeZero(select));
        return logic.mux(isUnknown, logic.mux(mayBeOne(select), forZero, forOne), forX);
      };
      return pair(
        picked(mayBeOne(zero), mayBeOne(one), mayBeOne(unknown)),
        picked(mayBeZero(zero), mayBeZero(one), mayBeZero(unknown)),
      );
    },
    mayBeUnknown: (a) => mayBeOne(a) !== (mayBeZero(a) ^ 1),
    differs: (a, b) => {
      const differ = logic.or(
        logic.xor(mayBeOne(a), mayBeOne(b)),
        logic.xor(mayBeZero(a), mayBeZero(b)),
      );
      return pair(differ, differ ^ 1);
    },
    merge: (a, b) => pair(logic.or(mayBeOne(a), mayBeOne(b)), logic.or(mayBeZero(a), mayBeZero(b))),
    areSame: (a, b) =>
      prover.areEqual(mayBeOne(a), mayBeOne(b)) && prover.areEqual(mayBeZero(a), mayBeZero(b)),
  };
}

/** Plain values 0, 1 and 2 for x, for trying things out: the same rules without a graph. */
export function scalar(hasUnknown: boolean): Algebra {
  const and = (a: NetValue, b: NetValue): NetValue =>
    a === 0 || b === 0 ? 0 : a === 1 && b === 1 ? 1 : 2;
  const not = (a: NetValue): NetValue => (a === 2 ? 2 : 1 - a);
  return {
    zero: 0,
    one: 1,
    unknown: hasUnknown ? 2 : 0,
    hasUnknown,
    not,
    and,
    or: (a, b) => not(and(not(a), not(b))),
    xor: (a, b) => (a === 2 || b === 2 ? 2 : a ^ b),
    mux: (select, zero, one) => (select === 0 || zero === one ? zero : select === 1 ? one : 2),
    pick: (select, zero, one, unknown) => [zero, one, unknown][select]!,
    mayBeUnknown: (a) => a === 2,
    differs: (a, b) => (a === b ? 0 : 1),
    merge: (a, b) => (a === b ? a : 2),
    areSame: (a, b) => a === b,
  };
}
