import { createCipheriv } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { mapped } from '../../benchmarks/circuits/cells/mapping/mapped.js';
import { circuits } from '../../benchmarks/circuits/index.js';
import { verilog } from '../../benchmarks/circuits/verilog.js';
import type { Design } from '../../compiler/compile.js';
import type { EngineName } from '../../compiler/engines.js';
import { RandomBits } from '../../runtime/random.js';
import { designWith, models } from '../benchmarks/cells/reading.js';
import { poweredEngine } from '../support/ownCircuits.js';
import { type PortValues, playValues } from '../support/portValues.js';

/** Cycles from a start to the ciphertext, where the next one may start. */
const LATENCY = 11;

interface Task {
  readonly key: bigint;
  readonly plaintext: bigint;
}

const hex = (block: bigint): string => block.toString(16).padStart(32, '0');

/** Encrypts blocks one behind another. */
async function encrypt(design: Design, engine: EngineName, tasks: readonly Task[]) {
  const pause = new Array<PortValues>(LATENCY - 1).fill({ start: 0 });
  const rows = tasks.flatMap((task) => [{ ...task, start: 1 }, ...pause]);
  const read = playValues(await poweredEngine(design, engine), [...rows, { start: 0 }]);
  return tasks.map((_, i) => {
    const cycle = (i + 1) * LATENCY;
    return read('done', cycle) === 1n ? hex(read('ciphertext', cycle)) : 'not done';
  });
}

// The platform's implementation, which has nothing in common with the circuit.
function platformCiphertext({ key, plaintext }: Task): string {
  const cipher = createCipheriv('aes-128-ecb', Buffer.from(hex(key), 'hex'), null);
  return cipher.setAutoPadding(false).update(hex(plaintext), 'hex', 'hex');
}

// FIPS 197 (2001), appendix B "Cipher Example" and C.1 "AES-128" (values from memory).
const examples: readonly Task[] = [
  { key: 0x2b7e151628aed2a6abf7158809cf4f3cn, plaintext: 0x3243f6a8885a308d313198a2e0370734n },
  { key: 0x000102030405060708090a0b0c0d0e0fn, plaintext: 0x00112233445566778899aabbccddeeffn },
];
const ciphertexts = ['3925841d02dc09fbdc118597196a0b32', '69c4e0d86a7b0430d8cdb78070b4c55a'];

function randomTasks(count: number): Task[] {
  const random = new RandomBits(197);
  const block = () => [0, 1, 2, 3].reduce((sum) => (sum << 32n) | BigInt(random.next()), 0n);
  return Array.from({ length: count }, () => ({ key: block(), plaintext: block() }));
}

const aes = circuits.find(({ name }) => name === 'aes128')!.build();

describe.each([
  ['cells', false],
  ['cells with a clock tree and clock gates', true],
] as const)('AES-128 made of %s', (_, hasClockTree) => {
  const netlist = [...verilog(mapped(aes, { hasClockTree }))].join('');

  it.each(models)('encrypts the examples of FIPS 197 with %s models', async (model) => {
    const design = designWith(model, netlist);
    expect(await encrypt(design, 'reference', examples)).toEqual(ciphertexts);
    expect(await encrypt(design, 'wasm', examples)).toEqual(ciphertexts);
  });

  it.each(models)('encrypts as the platform does with %s models', async (model) => {
    const tasks = randomTasks(200);
    const design = designWith(model, netlist);
    expect(await encrypt(design, 'bytecode', tasks)).toEqual(tasks.map(platformCiphertext));
  });
});
