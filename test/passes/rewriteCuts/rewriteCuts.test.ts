import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { checkLogic } from '../../../compiler/logic/check.js';
import { type Logic, LogicOp } from '../../../compiler/logic/logic.js';
import { compact } from '../../../compiler/passes/compact.js';
import { groupRegisters } from '../../../compiler/passes/groupRegisters/groupRegisters.js';
import { rewriteCuts } from '../../../compiler/passes/rewriteCuts/rewriteCuts.js';
import { evaluateLogic, logicOf } from '../../support/logic.js';
import { randomBanks } from '../../support/randomBanks.js';
import { randomCircuit } from '../../support/randomCircuit.js';

const circuits = randomCircuit({ clocking: 'gated', latches: true, maxGates: 80 });

/** Operations as they are emitted, inversions apart: a multiplexer is three. */
const operations = ({ op }: Logic): number =>
  op.reduce((sum, kind) => sum + (kind < LogicOp.And ? 0 : kind === LogicOp.Mux ? 3 : 1), 0);

describe('rewriteCuts', () => {
  it('keeps what outputs and registers compute, by no more operations', () => {
    let [before, saved] = [0, 0];
    fc.assert(
      fc.property(circuits, fc.boolean(), fc.nat(), (circuit, threeValued, seed) => {
        const logic = compact(logicOf(circuit, { threeValued }));
        const smaller = rewriteCuts(logic);
        checkLogic(smaller);
        expect(evaluateLogic(smaller, seed)).toEqual(evaluateLogic(logic, seed));
        expect(smaller.states).toEqual(logic.states);
        expect(operations(smaller)).toBeLessThanOrEqual(operations(logic));
        before += operations(logic);
        saved += operations(logic) - operations(smaller);
      }),
      { seed: 31, numRuns: 80 },
    );
    // Without anything to save, nothing has been shown.
    expect(saved / before).toBeGreaterThan(0.1);
  });

  it('keeps what updates of neighbouring registers read', () => {
    let updates = 0;
    fc.assert(
      fc.property(randomBanks(), fc.nat(), (circuit, seed) => {
        const logic = groupRegisters(compact(logicOf(circuit)));
        const smaller = rewriteCuts(logic);
        checkLogic(smaller);
        expect(evaluateLogic(smaller, seed)).toEqual(evaluateLogic(logic, seed));
        updates += smaller.updates.length;
      }),
      { seed: 32, numRuns: 40 },
    );
    expect(updates).toBeGreaterThan(50);
  });
});
