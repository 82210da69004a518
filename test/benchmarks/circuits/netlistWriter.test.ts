import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Module } from '../../../benchmarks/circuits/netlistWriter.js';
import { constantBus } from '../../../benchmarks/circuits/nets.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

function text(top: Module): string {
  return [...verilog(top)].join('');
}

function inverter(): Module {
  const m = new Module('inverter');
  m.output('y', m.not(m.input('a')));
  return m;
}

describe('the structural writer', () => {
  test('writes cells, parts and the top, each once and after what it instantiates', () => {
    const part = inverter();
    const m = new Module('divider');
    const clk = m.input('clk');
    const half = m.wires('half', 1);
    const first = m.instance<'y'>(part, 'first', { a: half });
    m.flipFlops(half, first.y, { clock: clk, value: 0n });
    m.output('half', half);
    m.output('other', m.instance<'y'>(part, 'second', { a: half }).y);
    expect(text(m)).toBe(`module inverter (
  input a,
  output y
);
  not (y, a);
endmodule

module dff0 (input clk, input d, output reg q);
  initial q = 1'b0;
  always @(posedge clk) q <= d;
endmodule

module divider (
  input clk,
  output half,
  output other
);
  wire first_y;
  inverter first (.a(half), .y(first_y));
  dff0 ff_half (.clk(clk), .d(first_y), .q(half));
  inverter second (.a(half), .y(other));
endmodule

`);
  });

  test('gives back any bits of vectors and constants that it connects', () => {
    const bit = fc.oneof(fc.nat(7), fc.constantFrom('zero', 'one'));
    fc.assert(
      fc.property(fc.array(bit, { minLength: 1, maxLength: 20 }), fc.nat(255), (picks, value) => {
        const m = new Module('picker');
        const vector = m.inputs('vector', 8);
        const picked = picks.map((pick) =>
          typeof pick === 'number' ? vector[pick]! : constantBus(pick === 'one' ? 1n : 0n, 1)[0]!,
        );
        m.output('picked', picked);
        const evaluator = evaluate(verilog(m));
        evaluator.set('vector', value);
        const expected = picks.map((pick) =>
          typeof pick === 'number' ? (value >> pick) & 1 : Number(pick === 'one'),
        );
        expect(evaluator.get('picked')).toBe(BigInt(`0b${expected.toReversed().join('')}`));
      }),
      { seed: 1, numRuns: 200 },
    );
  });

  test('writes a part select for neighbouring bits, a name for a whole vector, a sized constant', () => {
    const m = new Module('wiring');
    const a = m.inputs('a', 4);
    m.output('turned', [a[3]!, a[0]!, a[1]!, a[2]!]);
    m.output('twice', [...a, ...a]);
    m.output('fixed', constantBus(0xa5n, 9));
    const assigned = text(m).match(/assign .*/g);
    expect(assigned).toEqual([
      'assign turned = {a[2:0], a[3]};',
      'assign twice = {a, a};',
      "assign fixed = 9'ha5;",
    ]);
  });

  test('declares the enable, the reset and its value as the flip-flop asks', () => {
    const m = new Module('registers');
    const clock = m.input('clk');
    const enable = m.input('enable');
    const reset = m.input('reset');
    const d = m.inputs('d', 2);
    const q = m.wires('q', 2);
    m.flipFlops(q, d, { clock, enable, reset, value: 0b10n });
    m.output('q', q);
    const evaluator = evaluate(verilog(m));
    const next = (inputs: Record<string, number>) => {
      for (const [name, value] of Object.entries(inputs)) evaluator.set(name, value);
      evaluator.clock();
      return evaluator.get('q');
    };
    evaluator.set('reset', 1);
    expect(evaluator.get('q')).toBe(0b10n);
    expect(next({ reset: 0, d: 0b01, enable: 0 })).toBe(0b10n);
    expect(next({ enable: 1 })).toBe(0b01n);
  });

  test('refuses connections of the wrong width', () => {
    const m = new Module('top');
    const a = m.inputs('a', 2);
    expect(() => m.instance(inverter(), 'i', { a })).toThrow('expected 1 bits for i.a, got 2');
    expect(() => m.instance(inverter(), 'i', {})).toThrow('expected 1 bits for i.a, got 0');
  });

  test('refuses one name for two things', () => {
    const m = new Module('top');
    const a = m.input('a');
    m.named('b', m.not(a));
    m.instance(inverter(), 'b', { a });
    expect(() => text(m)).toThrow('top uses the name b twice');
  });

  test('refuses two different modules of one name', () => {
    const m = new Module('top');
    const a = m.input('a');
    m.instance(inverter(), 'i', { a });
    m.instance(inverter(), 'j', { a });
    expect(() => text(m)).toThrow('two different modules are named inverter');
  });

  test('refuses to rename what is no output of a gate', () => {
    const m = new Module('top');
    expect(() => m.named('b', m.input('a'))).toThrow('expected the output of a gate');
  });

  test('writes long modules in several chunks of whole lines', () => {
    const m = new Module('chain');
    let bit = m.input('a');
    for (let i = 0; i < 5000; i++) bit = m.not(bit);
    m.output('y', bit);
    const chunks = [...verilog(m)];
    expect(chunks.length).toBeGreaterThan(2);
    expect(chunks.every((chunk) => chunk.endsWith('\n'))).toBe(true);
    expect(m.size()).toEqual({ gates: 5000, registers: 0 });
  });
});
