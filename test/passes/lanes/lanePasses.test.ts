import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Logic, LogicOp } from '../../../compiler/logic/logic.js';
import { choosePolarity } from '../../../compiler/passes/choosePolarity.js';
import { compact } from '../../../compiler/passes/compact.js';
import { buildLaneProgram } from '../../../compiler/passes/lanes/buildLaneProgram.js';
import { fallingPolarity } from '../../../compiler/passes/lanes/fallingPolarity.js';
import { orderLaneNodes } from '../../../compiler/passes/lanes/orderLaneNodes.js';
import { moveStates, placeLaneStates } from '../../../compiler/passes/lanes/placeLaneStates.js';
import { firstLaneResult, LaneOp } from '../../../compiler/program/laneProgram.js';
import { laneValues } from '../../support/laneProgram.js';
import { logicOf } from '../../support/logic.js';
import { randomBanks } from '../../support/randomBanks.js';
import { randomCircuit } from '../../support/randomCircuit.js';

const circuits = fc.oneof(
  randomCircuit({ clocking: 'gated', latches: true, asynchronous: true }),
  randomBanks(),
);

const holds = (law: (logic: Logic, seed: number) => void): void =>
  fc.assert(
    fc.property(circuits, fc.boolean(), fc.nat(), (circuit, threeValued, seed) =>
      law(compact(logicOf(circuit, { threeValued })), seed),
    ),
    { seed: 46, numRuns: 40 },
  );

/** A word for an input or a state that does not depend on where it stands. */
const wordFor = (seed: number, what: string): number => {
  let hash = seed | 0;
  for (const character of what) hash = Math.imul(hash ^ character.charCodeAt(0), 0x01000193);
  return hash ^ (hash >>> 15);
};

/** Outputs and, by what they hold, next states of a logic graph. */
function evaluated(logic: Logic, seed: number) {
  const value = new Int32Array(logic.nodeCount);
  const of = (literal: number): number => value[literal >>> 1]! ^ -(literal & 1);
  for (let node = 1; node < logic.nodeCount; node++) {
    const [a, b, c] = [logic.a[node]!, logic.b[node]!, logic.c[node]!];
    if (logic.op[node] === LogicOp.Input) value[node] = wordFor(seed, `input ${a}`);
    else if (logic.op[node] === LogicOp.State) {
      const { role, index } = logic.states[a]!;
      value[node] = wordFor(seed, `${role} ${index}`);
    } else if (logic.op[node] === LogicOp.And) value[node] = of(a) & of(b);
    else if (logic.op[node] === LogicOp.Xor) value[node] = of(a) ^ of(b);
    else value[node] = (of(a) & of(c)) | (~of(a) & of(b));
  }
  const next = logic.next.map((literal, bit) => {
    const { role, index } = logic.states[bit]!;
    return [`${role} ${index}`, of(literal)] as const;
  });
  return { outputs: logic.outputs.map(of), next: new Map(next) };
}

describe('orderLaneNodes', () => {
  it('lists every operation once, operands first', () => {
    holds((logic) => {
      const order = orderLaneNodes(logic);
      const place = new Map(Array.from(order, (node, i) => [node, i]));
      const operations = logic.op.filter((op) => op >= LogicOp.And).length;
      expect(place.size).toBe(operations);
      expect(order.length).toBe(operations);
      for (const [node, i] of place) {
        const operands = [logic.a[node]!, logic.b[node]!];
        if (logic.op[node] === LogicOp.Mux) operands.push(logic.c[node]!);
        for (const operand of operands) expect(place.get(operand >>> 1) ?? -1).toBeLessThan(i);
      }
    });
  });
});

describe('placeLaneStates', () => {
  it('puts state bits in the order in which their next values are made', () => {
    holds((logic) => {
      const order = orderLaneNodes(logic);
      const placement = placeLaneStates(logic, order);
      expect(Array.from(placement).sort((p, q) => p - q)).toEqual([...logic.states.keys()]);
      const madeAt = new Map(Array.from(order, (node, i) => [node, i]));
      const made = moveStates(logic, placement)
        .next.map((literal) => madeAt.get(literal >>> 1))
        .filter((at) => at !== undefined);
      expect(made).toEqual([...made].sort((p, q) => p - q));
    });
  });
});

describe('buildLaneProgram', () => {
  it.each([
    ['fallingPolarity', fallingPolarity],
    ['choosePolarity', choosePolarity],
  ])('computes what the logic does, in the polarity of %s', (_, polarity) => {
    holds((unplaced, seed) => {
      const order = orderLaneNodes(unplaced);
      const logic = moveStates(unplaced, placeLaneStates(unplaced, order));
      const program = buildLaneProgram(logic, order, polarity(logic));
      const inputs = Array.from({ length: logic.inputCount }, (_, i) =>
        wordFor(seed, `input ${i}`),
      );
      const kept = (bit: number): number => -program.stateInverted[bit]!;
      const states = logic.states.map(
        ({ role, index }, bit) => wordFor(seed, `${role} ${index}`) ^ kept(bit),
      );
      const values = laneValues(program, inputs, states);
      const expected = evaluated(unplaced, seed);
      expect(Array.from(program.outputs, (value) => values[value])).toEqual(expected.outputs);
      for (const [bit, value] of program.next.entries()) {
        const { role, index } = program.states[bit]!;
        expect(values[value]! ^ kept(bit)).toBe(expected.next.get(`${role} ${index}`));
      }
    });
  });
});

describe('fallingPolarity', () => {
  it('leaves inversions only to what is stored', () => {
    holds((logic) => {
      const program = buildLaneProgram(logic, orderLaneNodes(logic), fallingPolarity(logic));
      const stored = new Set([...program.outputs, ...program.next]);
      for (const { when } of program.faults) stored.add(when);
      for (const [i, op] of program.op.entries()) {
        expect(op).not.toBe(LaneOp.OrNot);
        if (op === LaneOp.Not) expect(stored).toContain(firstLaneResult(program) + i);
      }
    });
  });

  it('keeps state bits as they are where others share them', () => {
    holds((logic) => {
      const inverted = fallingPolarity(logic, true);
      const states = [...inverted.keys()].filter((node) => logic.op[node] === LogicOp.State);
      expect(states.map((node) => inverted[node])).toEqual(states.map(() => 0));
    });
  });
});
