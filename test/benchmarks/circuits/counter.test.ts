import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { counter } from '../../../benchmarks/circuits/counter.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

const full = 2n ** 64n - 1n;
const circuit = evaluate(verilog(counter()));

// Values next to a carry from one slice into the next, and any others.
const value = fc.oneof(
  fc.bigInt({ min: 0n, max: full }),
  fc.constantFrom(full, full - 1n, 0xffffn, 0xffff_ffffn, 0xffff_ffff_fffen, 0xffff_ffff_ffffn),
);
const step = fc.record({
  reset: fc.nat(9).map((n) => Number(n === 0)),
  load: fc.nat(4).map((n) => Number(n === 0)),
  enable: fc.nat(1),
  data: value,
});

describe('the counter', () => {
  test('resets, loads, counts and holds, in this order of precedence', () => {
    fc.assert(
      fc.property(fc.array(step, { minLength: 1, maxLength: 40 }), (steps) => {
        circuit.set('reset', 1);
        let count = circuit.get('count');
        expect(count).toBe(0n);
        for (const { reset, load, enable, data } of steps) {
          for (const [k, v] of Object.entries({ reset, load, enable, data })) circuit.set(k, v);
          if (reset) count = 0n;
          expect(circuit.get('count')).toBe(count);
          expect(circuit.get('terminal')).toBe(enable && count === full ? 1n : 0n);
          circuit.clock();
          if (reset) count = 0n;
          else if (load) count = data;
          else if (enable) count = (count + 1n) & full;
        }
      }),
      { seed: 5, numRuns: 100 },
    );
  });
});
