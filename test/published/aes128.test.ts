import { createCipheriv } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { type EngineName, engineNames } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

const design = ownDesign('aes128');

/** Cycles from a start to the ciphertext, where the next one may start. */
const LATENCY = 11;

interface Task {
  readonly key: bigint;
  readonly plaintext: bigint;
}

/** Encrypts blocks one behind another. */
async function encrypt(name: EngineName, tasks: readonly Task[]): Promise<string[]> {
  const pause = new Array<PortValues>(LATENCY - 1).fill({ start: 0 });
  const rows = tasks.flatMap((task) => [{ ...task, start: 1 }, ...pause]);
  const read = playValues(await poweredEngine(design, name), [...rows, { start: 0 }]);
  return tasks.map((_, i) => {
    const cycle = (i + 1) * LATENCY;
    return read('done', cycle) === 1n ? hex(read('ciphertext', cycle)) : 'not done';
  });
}

const hex = (block: bigint): string => block.toString(16).padStart(32, '0');

// The platform's implementation, which has nothing in common with the circuit.
function platformCiphertext({ key, plaintext }: Task): string {
  const cipher = createCipheriv('aes-128-ecb', Buffer.from(hex(key), 'hex'), null);
  return cipher.setAutoPadding(false).update(hex(plaintext), 'hex', 'hex');
}

describe('AES-128', () => {
  // FIPS 197 (2001), appendix B "Cipher Example" and C.1 "AES-128" (values from memory).
  it.each(engineNames)(
    'encrypts the examples of FIPS 197, appendices B and C.1, on %s',
    async (name) => {
      const b = {
        key: 0x2b7e151628aed2a6abf7158809cf4f3cn,
        plaintext: 0x3243f6a8885a308d313198a2e0370734n,
      };
      const c1 = {
        key: 0x000102030405060708090a0b0c0d0e0fn,
        plaintext: 0x00112233445566778899aabbccddeeffn,
      };
      expect(await encrypt(name, [b, c1])).toEqual([
        '3925841d02dc09fbdc118597196a0b32',
        '69c4e0d86a7b0430d8cdb78070b4c55a',
      ]);
    },
  );

  it('encrypts 1,000 random blocks under random keys as the platform does', async () => {
    const random = new RandomBits(197);
    const block = () =>
      Array.from({ length: 4 }, () => random.next()).reduce(
        (sum, w) => (sum << 32n) | BigInt(w),
        0n,
      );
    const tasks = Array.from({ length: 1000 }, () => ({ key: block(), plaintext: block() }));
    const expected = tasks.map(platformCiphertext);
    expect(await encrypt('wasm', tasks)).toEqual(expected);
    expect(await encrypt('bytecode', tasks)).toEqual(expected);
  });
});
