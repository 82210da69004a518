import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { crc32 } from '../../../benchmarks/circuits/crc32.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { type Evaluator, evaluate } from './evaluate.js';

interface Inputs {
  readonly data?: number;
  readonly enable?: number;
  readonly restart?: number;
}

function cycle(circuit: Evaluator, inputs: Inputs): void {
  circuit.set('data', inputs.data ?? 0);
  circuit.set('enable', inputs.enable ?? 0);
  circuit.set('restart', inputs.restart ?? 0);
  circuit.clock();
}

function bitsOf(bytes: Uint8Array): number[] {
  return [...bytes].flatMap((byte) => Array.from({ length: 8 }, (_, i) => (byte >> i) & 1));
}

/** Division as IEEE 802.3 writes it, highest power first, then complemented and turned round. */
function longDivision(bits: readonly number[]): bigint {
  let remainder = 0xffffffff;
  for (const bit of bits) {
    const feedback = (remainder >>> 31) ^ bit;
    remainder = ((remainder << 1) ^ (feedback ? 0x04c11db7 : 0)) >>> 0;
  }
  const complement = (~remainder >>> 0).toString(2).padStart(32, '0');
  return BigInt(`0b${[...complement].reverse().join('')}`);
}

describe('CRC-32', () => {
  test('runs from power-up to the check value cbf43926 of the message 123456789', () => {
    const circuit = evaluate(verilog(crc32()));
    for (const data of bitsOf(Buffer.from('123456789'))) cycle(circuit, { data, enable: 1 });
    expect(circuit.get('crc')).toBe(0xcbf43926n);
  });

  test('agrees with long division on any message, with pauses, after a restart', () => {
    const circuit = evaluate(verilog(crc32()));
    const message = fc.uint8Array({ minLength: 0, maxLength: 12 });
    fc.assert(
      fc.property(message, fc.nat(), (bytes, pauses) => {
        cycle(circuit, { data: 1, enable: 1, restart: 1 });
        const bits = bitsOf(bytes);
        for (const [i, data] of bits.entries()) {
          if ((pauses >> (i % 30)) & 1) cycle(circuit, { data: 1 - data });
          cycle(circuit, { data, enable: 1 });
        }
        expect(circuit.get('crc')).toBe(longDivision(bits));
      }),
      { seed: 4, numRuns: 100 },
    );
  });
});
