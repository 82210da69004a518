import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { checkLogic } from '../../compiler/logic/check.js';
import { type Literal, type Logic, LogicOp } from '../../compiler/logic/logic.js';
import { LogicBuilder } from '../../compiler/logic/logicBuilder.js';
import { compact } from '../../compiler/passes/compact.js';
import { sweepNodes } from '../../compiler/passes/sweepNodes/sweepNodes.js';
import { evaluateLogic, logicOf } from '../support/logic.js';
import { randomCircuit } from '../support/randomCircuit.js';

const circuits = randomCircuit({ clocking: 'gated', latches: true, maxGates: 80 });

const operations = ({ op }: Logic): number => op.filter((each) => each >= LogicOp.And).length;

/** A graph of five inputs with the outputs that are given. */
function graph(outputs: (logic: LogicBuilder, inputs: Literal[]) => Literal[]): Logic {
  const logic = new LogicBuilder();
  const made = outputs(
    logic,
    [0, 1, 2, 3, 4].map((i) => logic.input(i)),
  );
  const columns = logic.take();
  return {
    ...columns,
    nodeCount: columns.op.length,
    inputCount: 5,
    outputs: made,
    ...{ next: [], states: [], updates: [], writes: [], faults: [] },
  };
}

describe('sweepNodes', () => {
  it('keeps what outputs and registers compute, by no more operations', () => {
    let saved = 0;
    fc.assert(
      fc.property(circuits, fc.boolean(), fc.nat(), (circuit, threeValued, seed) => {
        const logic = compact(logicOf(circuit, { threeValued }));
        const swept = sweepNodes(logic);
        checkLogic(swept);
        expect(evaluateLogic(swept, seed)).toEqual(evaluateLogic(logic, seed));
        const smaller = compact(swept);
        expect(smaller.states).toEqual(logic.states);
        expect(operations(smaller)).toBeLessThanOrEqual(operations(logic));
        saved += operations(logic) - operations(smaller);
      }),
      { seed: 21, numRuns: 80 },
    );
    // Without anything to merge, nothing has been shown.
    expect(saved).toBeGreaterThan(50);
  });

  it('finds operations that are equal, opposite and constant', () => {
    const logic = graph((l, [a, b, c, d] = []) => {
      const carry = l.or(l.and(a!, b!), l.and(c!, l.or(a!, b!)));
      const same = l.or(l.and(a!, b!), l.and(c!, l.xor(a!, b!)));
      const opposite = l.or(l.and(l.not(a!), l.not(b!)), l.and(l.not(c!), l.not(l.and(a!, b!))));
      const never = l.and(l.and(l.xor(a!, b!), l.xor(a!, c!)), l.xor(b!, c!));
      return [carry, same, opposite, l.or(never, d!)];
    });
    const { outputs, op } = sweepNodes(logic);
    expect(outputs[1]).toBe(outputs[0]);
    expect(outputs[2]).toBe(outputs[0]! ^ 1);
    expect(op[outputs[3]! >>> 1]).toBe(LogicOp.Input);
    expect(operations(compact(sweepNodes(logic)))).toBe(4);
  });

  it('leaves operations apart that differ for one combination', () => {
    // Among random trials the last bits of a wide and hardly ever matter.
    const logic = new LogicBuilder();
    const inputs = Array.from({ length: 40 }, (_, i) => logic.input(i));
    const all = inputs.slice(1).reduce((so, input) => logic.and(so, input), inputs[0]!);
    const but = inputs.slice(1).reduce((so, input) => logic.and(so, input), logic.not(inputs[0]!));
    const columns = logic.take();
    const made: Logic = {
      ...columns,
      nodeCount: columns.op.length,
      inputCount: inputs.length,
      outputs: [all, but],
      ...{ next: [], states: [], updates: [], writes: [], faults: [] },
    };
    expect(sweepNodes(made).outputs).toEqual([all, but]);
  });
});
