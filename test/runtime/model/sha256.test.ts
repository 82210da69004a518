import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { sha256 } from '../../../runtime/model/sha256.js';

describe('sha256', () => {
  it('agrees with the worked examples of the standard', () => {
    // FIPS 180-2, appendix B.1 and B.2; the values are from memory.
    const digest = (text: string) => sha256(new TextEncoder().encode(text));
    expect(digest('abc')).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad');
    expect(digest('abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq')).toBe(
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    );
  });

  it('agrees with the one of OpenSSL for all lengths around whole blocks', () => {
    for (let length = 0; length < 200; length++) {
      const bytes = Uint8Array.from({ length }, (_, i) => i * 7 + length);
      expect(sha256(bytes)).toBe(createHash('sha256').update(bytes).digest('hex'));
    }
  });
});
