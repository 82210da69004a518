import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { type EngineName, engineNames } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { ownDesign, poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

const design = ownDesign('sha256');

/** Cycles from a start to the digest, where the next block may start. */
const LATENCY = 66;

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

/** Digests messages one behind another. */
async function digest(name: EngineName, messages: readonly Buffer[]): Promise<string[]> {
  const pause = new Array<PortValues>(LATENCY - 1).fill({ start: 0 });
  const rows: PortValues[] = [];
  const ends = messages.map((message) => {
    blocksOf(message).forEach((block, i) => {
      rows.push({ block, first: i === 0 ? 1 : 0, start: 1 }, ...pause);
    });
    return rows.length;
  });
  const read = playValues(await poweredEngine(design, name), [...rows, { start: 0 }]);
  return ends.map((cycle) =>
    read('done', cycle) === 1n ? read('digest', cycle).toString(16).padStart(64, '0') : 'not done',
  );
}

describe('SHA-256', () => {
  // The examples that NIST publishes with FIPS 180-4 (2015), "SHA-256", one block and two blocks
  // (values from memory).
  it.each(engineNames)('digests the examples of FIPS 180-4, on %s', async (name) => {
    const messages = ['abc', 'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq'];
    expect(
      await digest(
        name,
        messages.map((text) => Buffer.from(text)),
      ),
    ).toEqual([
      'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ]);
  });

  it('digests 200 random messages of random lengths as the platform does', async () => {
    const random = new RandomBits(180);
    const messages = Array.from({ length: 200 }, () =>
      Buffer.from(Array.from({ length: random.next() % 300 }, () => random.next() & 0xff)),
    );
    const expected = messages.map((m) => createHash('sha256').update(m).digest('hex'));
    expect(await digest('wasm', messages)).toEqual(expected);
  });
});
