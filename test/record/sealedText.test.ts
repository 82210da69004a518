import { describe, expect, it } from 'vitest';
import { DamagedFile, sealed, unsealed } from '../../compiler/record/sealedText.js';

const content = { name: 'Schleuse', umlaut: 'ü', list: [1, 'two', { three: 3 }], none: null };

describe('a sealed text', () => {
  it('is JSON that comes back as it was', () => {
    const bytes = sealed(content);
    expect(unsealed('m', bytes)).toEqual(content);
    expect(JSON.parse(new TextDecoder().decode(bytes))).toMatchObject(content);
  });

  it('is refused where any byte of it is another one', () => {
    const bytes = sealed(content);
    for (let at = 0; at < bytes.length; at++) {
      for (const change of [1, 2, 0x10, 0x20, 0x80, 0xff]) {
        const damaged = Uint8Array.from(bytes);
        damaged[at]! ^= change;
        expect(() => unsealed('m', damaged)).toThrow(DamagedFile);
      }
    }
  });

  it('is refused where it ends early or goes on', () => {
    const bytes = sealed(content);
    for (let length = 0; length < bytes.length; length++) {
      expect(() => unsealed('m', bytes.subarray(0, length))).toThrow(DamagedFile);
    }
    expect(() => unsealed('m', Uint8Array.from([...bytes, 0x20]))).toThrow(DamagedFile);
  });
});
