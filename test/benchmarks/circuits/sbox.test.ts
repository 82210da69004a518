import { describe, expect, test } from 'vitest';
import { sbox } from '../../../benchmarks/circuits/sbox.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

const circuit = sbox();
const evaluator = evaluate(verilog(circuit));

function substituted(x: number): number {
  evaluator.set('x', x);
  return Number(evaluator.get('y'));
}

describe('the S-box', () => {
  test('has the 256 entries of FIPS 197, section 5.1.1, by walking a generator and its inverse', () => {
    // 3 generates the multiplicative group: p runs over its powers and q over their inverses.
    const turn = (x: number, by: number) => ((x << by) | (x >> (8 - by))) & 0xff;
    const double = (x: number) => ((x << 1) ^ (x & 0x80 ? 0x11b : 0)) & 0xff;
    const third = (x: number) => {
      let y = x ^ (x << 1);
      y ^= y << 2;
      y ^= y << 4;
      return (y & 0xff) ^ (y & 0x80 ? 0x09 : 0);
    };
    const entries = new Map([[0, 0x63]]);
    for (let i = 0, p = 1, q = 1; i < 255; i++, p ^= double(p), q = third(q)) {
      entries.set(p, q ^ turn(q, 1) ^ turn(q, 2) ^ turn(q, 3) ^ turn(q, 4) ^ 0x63);
    }
    expect(entries.size).toBe(256);
    for (const [x, y] of entries) expect(substituted(x)).toBe(y);
  });

  test('has the entries that FIPS 197 prints: 53 gives ed, the example of section 5.1.1', () => {
    expect(substituted(0x53)).toBe(0xed);
  });

  test('needs fewer than 170 gates', () => {
    expect(circuit.size().gates).toBeLessThan(170);
  });
});
