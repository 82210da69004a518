import { describe, expect, it } from 'vitest';
import { type Literal, type Logic, LogicOp } from '../../compiler/logic/logic.js';
import { LogicBuilder } from '../../compiler/logic/logicBuilder.js';
import { sinksOf } from '../../compiler/logic/sinks.js';
import { cutBlocks } from '../../compiler/passes/cutBlocks.js';
import { orderNodes } from '../../compiler/passes/orderNodes.js';

/** Stages of many values each, every one of which ends in a single value for the next. */
function narrowStages(stages: number, width: number): Logic {
  const logic = new LogicBuilder({ recover: false });
  const inputs = Array.from({ length: width }, (_, i) => logic.input(i));
  let carried: Literal = inputs[0]!;
  for (let stage = 0; stage < stages; stage++) {
    const row = inputs.map((input, i) =>
      logic.xor(logic.and(carried, input), inputs[(i + 1) % width]!),
    );
    carried = row.reduce(
      (any, each) => logic.and(any, logic.xor(each, carried)),
      logic.not(carried),
    );
  }
  const columns = logic.take();
  return {
    ...columns,
    nodeCount: columns.op.length,
    inputCount: width,
    outputs: [carried],
    next: [],
    states: [],
    updates: [],
    writes: [],
    faults: [],
  };
}

describe('cutBlocks', () => {
  const logic = narrowStages(20, 80);
  const order = orderNodes(logic, sinksOf(logic));
  const starts = cutBlocks(logic, order);
  const blocks = starts.map((start, i) => [start, starts[i + 1] ?? order.length] as const);

  it('makes blocks of 500 to 1,200 nodes that cover the order', () => {
    expect(blocks.length).toBeGreaterThan(3);
    expect(blocks[0]![0]).toBe(0);
    for (const [start, end] of blocks.slice(0, -1)) {
      expect(end - start).toBeGreaterThanOrEqual(500);
      expect(end - start).toBeLessThanOrEqual(1200);
    }
    const [lastStart, lastEnd] = blocks.at(-1)!;
    expect(lastEnd - lastStart).toBeLessThanOrEqual(1200);
  });

  it('cuts where the fewest values cross', () => {
    const blockOf = new Map<number, number>();
    blocks.forEach(([start, end], block) => {
      for (let at = start; at < end; at++) blockOf.set(order[at]!, block);
    });
    const crossing = new Set<number>();
    for (const node of order) {
      const operands = [logic.a[node]!, logic.b[node]!];
      for (const operand of operands.map((literal) => literal >>> 1)) {
        const isMade = logic.op[operand]! >= LogicOp.And;
        if (isMade && blockOf.get(operand) !== blockOf.get(node)) crossing.add(operand);
      }
    }
    // A cut within a stage would be crossed by tens of values, one between stages by very few.
    expect(crossing.size).toBeLessThanOrEqual(3 * (blocks.length - 1));
  });
});
