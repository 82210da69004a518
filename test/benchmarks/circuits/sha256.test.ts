import { createHash } from 'node:crypto';
import { describe, expect, test } from 'vitest';
import { sha256 } from '../../../benchmarks/circuits/sha256.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { evaluate } from './evaluate.js';

const core = evaluate(verilog(sha256()));

/** The blocks of a message with the padding of FIPS 180-4, section 5.1.1. */
function blocksOf(message: Buffer): bigint[] {
  const length = Buffer.alloc(8);
  length.writeBigUInt64BE(BigInt(message.length) * 8n);
  const zeros = Buffer.alloc((119 - (message.length % 64)) % 64);
  const padded = Buffer.concat([message, Buffer.of(0x80), zeros, length]);
  return Array.from({ length: padded.length / 64 }, (_, i) =>
    BigInt(`0x${padded.subarray(64 * i, 64 * i + 64).toString('hex')}`),
  );
}

/** Takes one block; returns the cycles from the start to `done`. */
function compress(block: bigint, first: boolean): number {
  core.set('block', block);
  core.set('first', first ? 1 : 0);
  core.set('start', 1);
  core.clock();
  core.set('start', 0);
  let cycles = 1;
  for (; core.get('done') === 0n && cycles < 1000; cycles++) core.clock();
  return cycles;
}

function digestOf(message: Buffer): string {
  for (const [i, block] of blocksOf(message).entries()) compress(block, i === 0);
  return core.get('digest').toString(16).padStart(64, '0');
}

describe('SHA-256', () => {
  // The examples that NIST publishes with FIPS 180-4 (values from memory).
  test.each([
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
  ])('digests %s as the standard shows', (message, digest) => {
    expect(digestOf(Buffer.from(message))).toBe(digest);
  });

  test('agrees with the SHA-256 of the platform on messages of up to four blocks', () => {
    for (const length of [0, 1, 55, 56, 63, 64, 65, 119, 120, 200]) {
      const message = Buffer.alloc(length, `message of ${length}`);
      expect(digestOf(message)).toBe(createHash('sha256').update(message).digest('hex'));
    }
  });

  test('takes 66 cycles a block, is done for one and then holds the digest', () => {
    expect(compress(1n, true)).toBe(66);
    const digest = core.get('digest');
    core.clock();
    expect([core.get('done'), core.get('busy')]).toEqual([0n, 0n]);
    core.clock(100);
    expect(core.get('digest')).toBe(digest);
  });

  test('begins anew on a start while busy', () => {
    core.set('block', 5n);
    core.set('first', 1);
    core.set('start', 1);
    core.clock();
    core.set('start', 0);
    core.clock(20);
    expect(digestOf(Buffer.from('again'))).toBe(createHash('sha256').update('again').digest('hex'));
  });
});
