import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cyclesOf } from '../../compiler/compile.js';
import { Source } from '../../compiler/diagnostics/source.js';
import { checkLogic } from '../../compiler/logic/check.js';
import { FALSE, type Logic, LogicOp } from '../../compiler/logic/logic.js';
import { sinksOf } from '../../compiler/logic/sinks.js';
import { choosePolarity } from '../../compiler/passes/choosePolarity.js';
import { compact } from '../../compiler/passes/compact.js';
import { groupRegisters } from '../../compiler/passes/groupRegisters/groupRegisters.js';
import { orderNodes } from '../../compiler/passes/orderNodes.js';
import { orderSinks } from '../../compiler/passes/orderSinks.js';
import { evaluateLogic, logicOf } from '../support/logic.js';
import { designFrom } from '../support/ownCircuits.js';
import { randomBanks } from '../support/randomBanks.js';
import { randomCircuit } from '../support/randomCircuit.js';

const circuits = randomCircuit({ clocking: 'gated', latches: true, asynchronous: true });

/** Random circuits with banks of registers, as real ones have: enables, resets, shifts, copies. */
const banks = randomBanks();

const holds = (law: (logic: Logic, seed: number) => void): void =>
  fc.assert(
    fc.property(circuits, fc.boolean(), fc.nat(), (circuit, threeValued, seed) =>
      law(logicOf(circuit, { threeValued }), seed),
    ),
    { seed: 42, numRuns: 90 },
  );

describe('compact', () => {
  it('keeps what outputs and registers compute', () => {
    holds((logic, seed) => {
      const smaller = compact(logic);
      checkLogic(smaller);
      const before = evaluateLogic(logic, seed);
      const after = evaluateLogic(smaller, seed);
      expect(after.outputs).toEqual(before.outputs);
      smaller.states.forEach(({ role, index }, bit) => {
        const was = logic.states.findIndex((s) => s.role === role && s.index === index);
        expect(after.next[bit]).toBe(before.next[was]);
      });
    });
  });

  it('leaves no node that nothing reads', () => {
    holds((logic) => {
      const { nodeCount, op, a, b, c, outputs, next, faults } = compact(logic);
      const read = new Set<number>([...outputs, ...next, ...faults.map((f) => f.when)]);
      for (let n = 1; n < nodeCount; n++) {
        if (op[n]! < LogicOp.And) continue;
        read.add(a[n]!).add(b[n]!);
        if (op[n] === LogicOp.Mux) read.add(c[n]!);
      }
      const nodes = new Set([...read].map((literal) => literal >>> 1));
      for (let n = 1; n < nodeCount; n++) expect(nodes.has(n)).toBe(true);
    });
  });

  it('keeps every register and latch, read or not', () => {
    holds((logic) => {
      const elements = (graph: Logic) => graph.states.filter((s) => s.role === 'value').length;
      expect(elements(compact(logic))).toBe(elements(logic));
    });
  });
});

describe('orderNodes', () => {
  it('lists every operation once, operands first', () => {
    holds((made) => {
      const logic = compact(made);
      const order = orderNodes(logic, orderSinks(logic));
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

describe('orderSinks', () => {
  it('lists every sink as often as it occurs', () => {
    holds((logic) => {
      expect([...orderSinks(logic)].sort()).toEqual(sinksOf(logic).sort());
    });
  });

  it('takes more sinks than a call has arguments', () => {
    const [circuit] = fc.sample(randomCircuit(), { numRuns: 1, seed: 1 });
    const logic = { ...logicOf(circuit!), outputs: new Array<number>(300_000).fill(FALSE) };
    expect(orderSinks(logic)).toHaveLength(sinksOf(logic).length);
  });
});

describe('groupRegisters', () => {
  it('keeps what outputs and registers compute', () => {
    let updates = 0;
    fc.assert(
      fc.property(banks, fc.nat(), (circuit, seed) => {
        const logic = compact(logicOf(circuit));
        const grouped = compact(groupRegisters(logic));
        checkLogic(grouped);
        const before = evaluateLogic(logic, seed);
        const after = evaluateLogic(grouped, seed);
        expect(after.outputs).toEqual(before.outputs);
        logic.states.forEach(({ role, index }, bit) => {
          const is = grouped.states.findIndex((s) => s.role === role && s.index === index);
          expect(after.next[is]).toBe(before.next[bit]);
        });
        updates += grouped.updates.length;
      }),
      { seed: 43, numRuns: 90 },
    );
    expect(updates).toBeGreaterThan(150);
  });

  it('leaves few registers of a small circuit as they are', () => {
    const updates = (width: number): number => {
      const text = `module m(input clk, en, input [${width - 1}:0] d, output reg [${width - 1}:0] q);
        always @(posedge clk) if (en) q <= d; endmodule`;
      return groupRegisters(compact(cyclesOf(designFrom(new Source('m.v', text))).cycles[0]!))
        .updates.length;
    };
    expect([updates(16), updates(64)]).toEqual([0, 4]);
  });
});

describe('choosePolarity', () => {
  const inversions = (logic: Logic, inverted: Uint8Array): number => {
    const needed = new Set<number>();
    const read = (literal: number, reader: number): void => {
      const isOdd = (literal & 1) ^ inverted[literal >>> 1]! ^ reader;
      if (literal > 1 && isOdd) needed.add(literal >>> 1);
    };
    for (let n = 1; n < logic.nodeCount; n++) {
      if (logic.op[n] === LogicOp.And) {
        read(logic.a[n]!, inverted[n]!);
        read(logic.b[n]!, inverted[n]!);
      } else if (logic.op[n] === LogicOp.Mux) {
        read(logic.b[n]!, inverted[n]!);
        read(logic.c[n]!, inverted[n]!);
      }
    }
    return needed.size;
  };

  it('gives exclusive-ors and multiplexers the polarity of their operands', () => {
    holds((logic) => {
      const inverted = choosePolarity(logic);
      for (let n = 1; n < logic.nodeCount; n++) {
        const [a, b] = [logic.a[n]! >>> 1, logic.b[n]!];
        if (logic.op[n] === LogicOp.Xor) {
          expect(inverted[n]).toBe(inverted[a]! ^ inverted[b >>> 1]!);
        } else if (logic.op[n] === LogicOp.Mux && b > 1) {
          expect(inverted[n]).toBe(inverted[b >>> 1]! ^ (b & 1));
        }
      }
    });
  });

  it('needs no more inversions than plain polarity for gates alone', () => {
    let gained = 0;
    holds((logic) => {
      const plain = inversions(logic, new Uint8Array(logic.nodeCount));
      gained += plain - inversions(logic, choosePolarity(logic));
    });
    expect(gained).toBeGreaterThan(0);
  });
});
