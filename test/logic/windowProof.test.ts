import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Literal, LogicOp } from '../../compiler/logic/logic.js';
import { LogicBuilder } from '../../compiler/logic/logicBuilder.js';
import { WindowProof } from '../../compiler/logic/windowProof.js';

const INPUTS = 5;
const COMBINATIONS = 1 << INPUTS;

/** The values of a literal for all combinations of five inputs. */
function truth(logic: LogicBuilder, literal: Literal): number {
  const value: number[] = [0];
  const of = (operand: Literal): number => value[operand >>> 1]! ^ -(operand & 1);
  for (let node = 1; node < logic.nodeCount; node++) {
    const op = logic.op(node);
    const [a, b, c] = [0, 1, 2].map((which) => logic.operand(node, which as 0 | 1 | 2));
    if (op === LogicOp.Input) {
      let column = 0;
      for (let i = 0; i < COMBINATIONS; i++) column |= ((i >>> a!) & 1) << i;
      value.push(column);
    } else if (op === LogicOp.And) value.push(of(a!) & of(b!));
    else if (op === LogicOp.Xor) value.push(of(a!) ^ of(b!));
    else value.push((of(a!) & of(c!)) | (~of(a!) & of(b!)));
  }
  return of(literal) | 0;
}

describe('WindowProof', () => {
  const step = fc.record({ kind: fc.nat(2), reads: fc.tuple(fc.nat(), fc.nat(), fc.nat()) });

  it('calls literals equal if and only if no combination of few inputs tells them apart', () => {
    let equal = 0;
    fc.assert(
      fc.property(fc.array(step, { minLength: 10, maxLength: 40 }), (steps) => {
        const logic = new LogicBuilder({ share: false, fold: false, recover: false });
        const literals: Literal[] = [0, 1];
        for (let i = 0; i < INPUTS; i++) literals.push(logic.input(i), logic.input(i) ^ 1);
        for (const { kind, reads } of steps) {
          const [a, b, c] = reads.map((at) => literals[at % literals.length]!);
          if (kind === 0) literals.push(logic.and(a!, b!));
          else if (kind === 1) literals.push(logic.xor(a!, b!));
          else literals.push(logic.mux(a!, b!, c!));
        }
        const proof = new WindowProof(logic, 1e6);
        for (const [i, left] of literals.entries()) {
          const right = literals[(i * 7 + 3) % literals.length]!;
          const isSame = truth(logic, left) === truth(logic, right);
          expect(proof.areEqual(left, right)).toBe(isSame);
          if (isSame && left !== right) equal++;
        }
      }),
      { seed: 5, numRuns: 60 },
    );
    expect(equal).toBeGreaterThan(30);
  });

  it('proves equality above many inputs by a narrow window', () => {
    const logic = new LogicBuilder({ recover: false });
    const wide = (from: number): Literal =>
      Array.from({ length: 30 }, (_, i) => logic.input(from + i)).reduce((p, q) => logic.and(p, q));
    const [p, q] = [wide(0), wide(30)];
    const one = logic.or(logic.and(p, logic.not(q)), logic.and(logic.not(p), q));
    const proof = new WindowProof(logic, 1e6);
    expect(proof.areEqual(one, logic.xor(p, q))).toBe(true);
    expect(proof.areEqual(one, logic.or(p, q))).toBe(false);
  });

  it('says no when its budget is spent', () => {
    const logic = new LogicBuilder({ recover: false });
    const [p, q] = [logic.input(0), logic.input(1)];
    const one = logic.or(logic.and(p, logic.not(q)), logic.and(logic.not(p), q));
    expect(new WindowProof(logic, 0).areEqual(one, logic.xor(p, q))).toBe(false);
  });
});
