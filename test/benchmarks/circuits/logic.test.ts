import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import * as logic from '../../../benchmarks/circuits/logic.js';
import { Module } from '../../../benchmarks/circuits/netlistWriter.js';
import type { Bus } from '../../../benchmarks/circuits/nets.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

const width = 9;
const word = fc.bigInt({ min: 0n, max: 2n ** BigInt(width) - 1n });
const modulo = (value: bigint) => BigInt.asUintN(width, value);

/** Builds combinational logic over three words and a bit; checks its result on random values. */
function expectLogic(
  build: (m: Module, words: [Bus, Bus, Bus], bit: Bus) => Bus,
  model: (words: [bigint, bigint, bigint], bit: bigint) => bigint,
): void {
  const m = new Module('logic');
  const words = [m.inputs('a', width), m.inputs('b', width), m.inputs('c', width)];
  m.output('y', build(m, words as [Bus, Bus, Bus], [m.input('bit')]));
  const evaluator = evaluate(verilog(m));
  fc.assert(
    fc.property(word, word, word, fc.bigInt({ min: 0n, max: 1n }), (a, b, c, bit) => {
      for (const [name, value] of Object.entries({ a, b, c, bit })) evaluator.set(name, value);
      expect(evaluator.get('y')).toBe(model([a, b, c], bit));
    }),
    { seed: 2, numRuns: 300 },
  );
}

describe('the logic of circuits', () => {
  test('adds words and a carry', () => {
    expectLogic(
      (m, [a, b, c], bit) => logic.add(m, width, a, b, c, bit),
      ([a, b, c], bit) => modulo(a + b + c + bit),
    );
  });

  test('adds 1 always or while a bit is 1', () => {
    expectLogic(
      (m, [a]) => logic.increment(m, a),
      ([a]) => modulo(a + 1n),
    );
    expectLogic(
      (m, [a], bit) => logic.increment(m, a, bit[0]),
      ([a], bit) => modulo(a + bit),
    );
  });

  test('subtracts 1', () => {
    expectLogic(
      (m, [a]) => logic.decrement(m, a),
      ([a]) => modulo(a - 1n),
    );
  });

  test('chooses between words and constants', () => {
    expectLogic(
      (m, [a, b], bit) => logic.mux(m, bit[0]!, a, b),
      ([a, b], bit) => (bit ? b : a),
    );
    for (const constant of [0n, 0x155n, 0x1ffn]) {
      expectLogic(
        (m, [a], bit) => logic.muxConstant(m, bit[0]!, a, constant),
        ([a], bit) => (bit ? constant : a),
      );
    }
  });

  test('joins words bit by bit and all bits of a word', () => {
    expectLogic(
      (m, [a, b]) => logic.zip(m, 'xor', a, b),
      ([a, b]) => a ^ b,
    );
    expectLogic(
      (m, [a], bit) => logic.zipWith(m, 'and', logic.invert(m, a), bit[0]!),
      ([a], bit) => (bit ? modulo(~a) : 0n),
    );
    expectLogic(
      (m, [a]) => [logic.tree(m, 'or', a)],
      ([a]) => (a ? 1n : 0n),
    );
  });

  test('finds just the one value that equals a constant', () => {
    const values = Array.from({ length: 8 }, (_, i) => i);
    const m = new Module('decoder');
    const a = m.inputs('a', 3);
    m.output(
      'is',
      values.map((value) => logic.equals(m, a, value)),
    );
    const evaluator = evaluate(verilog(m));
    for (const value of values) {
      evaluator.set('a', value);
      expect(evaluator.get('is')).toBe(1n << BigInt(value));
    }
  });

  test('refuses a tree of nothing', () => {
    expect(() => logic.tree(new Module('m'), 'and', [])).toThrow('expected at least one bit');
  });
});
