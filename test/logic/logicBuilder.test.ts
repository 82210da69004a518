import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { checkLogic } from '../../compiler/logic/check.js';
import { FALSE, type Literal, type Logic, LogicOp, TRUE } from '../../compiler/logic/logic.js';
import { LogicBuilder, type LogicOptions } from '../../compiler/logic/logicBuilder.js';
import { evaluateLogic } from '../support/logic.js';

const graph = (logic: LogicBuilder, outputs: readonly Literal[]): Logic => {
  const columns = logic.take();
  const common = { inputCount: 8, next: [], states: [], updates: [], writes: [], faults: [] };
  return { ...common, ...columns, nodeCount: columns.op.length, outputs };
};

describe('LogicBuilder', () => {
  const logic = new LogicBuilder();
  const [a, b, s] = [logic.input(0), logic.input(1), logic.input(2)] as const;

  it('makes equal nodes once, whatever the order of operands', () => {
    expect(logic.and(a, b)).toBe(logic.and(b, a));
    expect(logic.xor(a ^ 1, b)).toBe(logic.xor(a, b) ^ 1);
    expect(logic.mux(s, a ^ 1, b ^ 1)).toBe(logic.mux(s, a, b) ^ 1);
    expect(logic.mux(s ^ 1, a, b)).toBe(logic.mux(s, b, a));
  });

  it('folds constants, equal and opposite operands', () => {
    expect(logic.and(a, FALSE)).toBe(FALSE);
    expect(logic.and(a, TRUE)).toBe(a);
    expect(logic.and(a, a)).toBe(a);
    expect(logic.and(a, a ^ 1)).toBe(FALSE);
    expect(logic.xor(a, a)).toBe(FALSE);
    expect(logic.xor(a, TRUE)).toBe(a ^ 1);
    expect(logic.mux(s, a, a)).toBe(a);
    expect(logic.mux(s, FALSE, TRUE)).toBe(s);
    expect(logic.mux(s, a, a ^ 1)).toBe(logic.xor(s, a));
  });

  it('absorbs an operand that another one holds', () => {
    const both = logic.and(a, b);
    expect(logic.and(a, both)).toBe(both);
    expect(logic.and(a ^ 1, both)).toBe(FALSE);
    expect(logic.and(a, both ^ 1)).toBe(logic.and(a, b ^ 1));
    expect(logic.and(a ^ 1, both ^ 1)).toBe(a ^ 1);
  });

  it('finds an exclusive-or and a multiplexer in and/or form', () => {
    const xor = logic.or(logic.and(a, b ^ 1), logic.and(a ^ 1, b));
    expect(xor).toBe(logic.xor(a, b));
    const fourNands = (p: Literal, q: Literal): Literal => {
      const n = logic.and(p, q) ^ 1;
      return logic.and(logic.and(p, n) ^ 1, logic.and(q, n) ^ 1) ^ 1;
    };
    expect(fourNands(a, b)).toBe(logic.xor(a, b));
    const mux = logic.or(logic.and(s, b), logic.and(s ^ 1, a));
    expect(mux).toBe(logic.mux(s, a, b));
    expect(logic.op(mux >>> 1)).toBe(LogicOp.Mux);
  });
});

describe('the simplifications of LogicBuilder', () => {
  type Step = readonly [kind: number, a: number, b: number, c: number];
  const step = fc.tuple(fc.nat(2), fc.nat(99), fc.nat(99), fc.nat(99));

  function build(steps: readonly Step[], options: LogicOptions): Logic {
    const logic = new LogicBuilder(options);
    const made: Literal[] = [FALSE, TRUE, ...[0, 1, 2, 3].map((i) => logic.input(i))];
    const at = (choice: number): Literal => made[(choice >> 1) % made.length]! ^ (choice & 1);
    for (const [kind, a, b, c] of steps) {
      if (kind === 0) made.push(logic.and(at(a), at(b)));
      else if (kind === 1) made.push(logic.xor(at(a), at(b)));
      else made.push(logic.mux(at(a), at(b), at(c)));
    }
    return graph(logic, made);
  }

  it('change no value, alone and together', () => {
    const options = fc.record({ share: fc.boolean(), fold: fc.boolean(), recover: fc.boolean() });
    fc.assert(
      fc.property(fc.array(step, { maxLength: 60 }), options, fc.nat(), (steps, chosen, seed) => {
        const plain = build(steps, { share: false, fold: false, recover: false });
        const simplified = build(steps, chosen);
        checkLogic(simplified);
        expect(evaluateLogic(simplified, seed)).toEqual(evaluateLogic(plain, seed));
        expect(simplified.nodeCount).toBeLessThanOrEqual(plain.nodeCount + steps.length * 4);
      }),
      { seed: 41, numRuns: 300 },
    );
  });
});
