import { createCipheriv, createHash } from 'node:crypto';
import { describe, expect, test } from 'vitest';
import { aes128 } from '../../../benchmarks/circuits/aes128.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { type Evaluator, evaluate } from './evaluate.js';

function begin(core: Evaluator, key: bigint, plaintext: bigint): void {
  core.set('key', key);
  core.set('plaintext', plaintext);
  core.set('start', 1);
  core.clock();
  core.set('start', 0);
}

/** Runs to `done`; returns the ciphertext and the cycles since the start. */
function finish(core: Evaluator): { ciphertext: bigint; cycles: number } {
  let cycles = 1;
  for (; core.get('done') === 0n && cycles < 1000; cycles++) core.clock();
  return { ciphertext: core.get('ciphertext'), cycles };
}

function block(label: string): bigint {
  return BigInt(`0x${createHash('md5').update(label).digest('hex')}`);
}

function expectedCiphertext(key: bigint, plaintext: bigint): bigint {
  const bytes = (value: bigint) => Buffer.from(value.toString(16).padStart(32, '0'), 'hex');
  const cipher = createCipheriv('aes-128-ecb', bytes(key), null).setAutoPadding(false);
  return BigInt(`0x${cipher.update(bytes(plaintext)).toString('hex')}`);
}

const core = evaluate(verilog(aes128(1)));

describe('AES-128', () => {
  // FIPS 197, appendices B and C.1 (values from memory, confirmed by the platform's own AES).
  test.each([
    [
      'B',
      0x2b7e151628aed2a6abf7158809cf4f3cn,
      0x3243f6a8885a308d313198a2e0370734n,
      0x3925841d02dc09fbdc118597196a0b32n,
    ],
    [
      'C.1',
      0x000102030405060708090a0b0c0d0e0fn,
      0x00112233445566778899aabbccddeeffn,
      0x69c4e0d86a7b0430d8cdb78070b4c55an,
    ],
  ])('encrypts the example of FIPS 197, appendix %s, in 11 cycles', (_, key, plaintext, result) => {
    begin(core, key, plaintext);
    expect(finish(core)).toEqual({ ciphertext: result, cycles: 11 });
    expect(expectedCiphertext(key, plaintext)).toBe(result);
  });

  test('agrees with the AES of the platform on other blocks', () => {
    for (let i = 0; i < 20; i++) {
      const [key, plaintext] = [block(`key ${i}`), block(`text ${i}`)];
      begin(core, key, plaintext);
      expect(finish(core).ciphertext).toBe(expectedCiphertext(key, plaintext));
    }
  });

  test('is busy for ten rounds, done for one cycle, and then holds the ciphertext', () => {
    begin(core, 1n, 2n);
    const seen = Array.from({ length: 14 }, () => {
      const pair = `${core.get('busy')}${core.get('done')}`;
      core.clock();
      return pair;
    });
    expect(seen.join(' ')).toBe(`${'10 '.repeat(10)}01 00 00 00`);
    expect(core.get('ciphertext')).toBe(expectedCiphertext(1n, 2n));
  });

  test('begins anew on a start while busy, or in the last round', () => {
    for (const cyclesBefore of [4, 9]) {
      begin(core, 3n, 4n);
      core.clock(cyclesBefore);
      begin(core, 5n, 6n);
      expect(finish(core)).toEqual({ ciphertext: expectedCiphertext(5n, 6n), cycles: 11 });
    }
  });

  test('encrypts once for each core of a chain', () => {
    const chain = evaluate(verilog(aes128(3)));
    const key = block('chain');
    begin(chain, key, 7n);
    expect(chain.get('busy')).toBe(1n);
    const once = expectedCiphertext(key, 7n);
    const thrice = expectedCiphertext(key, expectedCiphertext(key, once));
    expect(finish(chain)).toEqual({ ciphertext: thrice, cycles: 33 });
    expect(chain.get('busy')).toBe(0n);
  });

  test('scales with the cores past a million gates, in a text that hardly grows', () => {
    const one = aes128(1);
    const many = aes128(200);
    const perCore = one.size().gates;
    expect(many.size().gates).toBeGreaterThan(1_000_000);
    expect(many.size().gates - 200 * perCore).toBeLessThan(200);
    const length = (m: typeof one) => [...verilog(m)].join('').length;
    expect(length(many)).toBeLessThan(2 * length(one));
  });
});
