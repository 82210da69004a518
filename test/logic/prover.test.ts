import { describe, expect, it } from 'vitest';
import { FALSE, type Literal } from '../../compiler/logic/logic.js';
import { LogicBuilder } from '../../compiler/logic/logicBuilder.js';
import { Prover } from '../../compiler/logic/prover.js';

/** A builder that simplifies nothing, so that equal functions are different literals. */
const plain = () => new LogicBuilder({ share: false, fold: false, recover: false });

describe('a prover', () => {
  it('finds literals equal whatever their form, and tells them from others', () => {
    const logic = plain();
    const prover = new Prover(logic);
    const [a, b, c] = [logic.input(0), logic.state(0), logic.state(1)];
    const spread = logic.or(logic.and(a, b), logic.and(a, c));
    expect(prover.areEqual(logic.and(a, logic.or(b, c)), spread)).toBe(true);
    expect(prover.areEqual(logic.mux(a, FALSE, logic.or(b, c)), spread)).toBe(true);
    expect(prover.areEqual(logic.and(a, logic.xor(b, c)), spread)).toBe(false);
    expect(prover.areEqual(spread ^ 1, spread)).toBe(false);
    const never = logic.and(logic.and(a, b ^ 1), logic.and(b, a ^ 1));
    expect(prover.areEqual(never, FALSE)).toBe(true);
  });

  it('finds a difference in one combination of many', () => {
    const logic = plain();
    const all = (count: number): Literal =>
      Array.from({ length: count }, (_, i) => logic.input(i)).reduce((p, q) => logic.and(p, q));
    expect(new Prover(logic).areEqual(all(13), FALSE)).toBe(false);
  });

  it('takes for granted what it is told of two bits', () => {
    const logic = plain();
    const prover = new Prover(logic);
    const [one, zero] = [logic.state(0), logic.state(1)];
    const neither = logic.and(one ^ 1, zero ^ 1);
    expect(prover.areEqual(neither, FALSE)).toBe(false);
    const told = new Prover(logic);
    told.assumeEither(one, zero);
    expect(told.areEqual(neither, FALSE)).toBe(true);
    expect(told.areEqual(logic.and(one, zero), FALSE)).toBe(false);
    const other = new Prover(logic);
    other.assumeNotBoth(one, zero);
    expect(other.areEqual(logic.and(one, zero), FALSE)).toBe(true);
  });

  it('does not say that what is too large to try out is equal', () => {
    const logic = plain();
    const inputs = Array.from({ length: 40 }, (_, i) => logic.input(i));
    const forward = inputs.reduce((p, q) => logic.xor(p, q));
    const backward = inputs.reduceRight((p, q) => logic.xor(p, q));
    expect(new Prover(logic).areEqual(forward, backward)).toBe(false);
  });
});
