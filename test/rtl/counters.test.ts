import { describe, expect, it } from 'vitest';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { createEngine } from '../../compiler/engines.js';
import {
  expectModel,
  type Model,
  onEveryEngine,
  randomInputs,
  readingOf,
  rtlDesign,
  type Values,
} from './circuits.js';

const parity = (value: number): number => value.toString(2).replaceAll('0', '').length & 1;

const design = rtlDesign(['counters.v']);

const counters = (): Model => {
  let count = 0;
  let johnson = 0;
  let fibonacci = 0;
  let galois = 0;
  let decimal = 0;
  let carry = 0;
  return ({ rst, enable, down, load, steps, seed, d, by }) => {
    if (rst) [count, fibonacci, galois] = [0, 1, 1];
    const turn = by! < 11 ? by! : 0;
    const outputs = {
      gray: count ^ (count >> 1),
      binary: count,
      // Ones fill it from the right, then zeros.
      johnson: johnson < 5 ? (1 << johnson) - 1 : 31 & ~((1 << (johnson - 5)) - 1),
      fibonacci,
      galois,
      tens: Math.floor(decimal / 10),
      ones: decimal % 10,
      carry,
      rotated: ((d! << turn) | (d! >> (11 - turn))) & 2047,
      reversed: Number.parseInt(d!.toString(2).padStart(11, '0').split('').reverse().join(''), 2),
    };
    if (enable && !rst) count = (count + (down ? 15 : 1)) & 15;
    johnson = rst ? 0 : (johnson + enable!) % 10;
    if (!rst && load) [fibonacci, galois] = [seed!, seed! & 31];
    for (let step = 0; !rst && !load && step < steps!; step++) {
      fibonacci = ((fibonacci << 1) & 255) | parity(fibonacci & 0b10111000);
      galois = (galois >> 1) ^ (galois & 1 ? 0b10100 : 0);
    }
    carry = rst || decimal + steps! < 100 ? 0 : 1;
    decimal = rst ? 0 : (decimal + steps!) % 100;
    return outputs;
  };
};

describe('counters, feedback registers and the rotator', () => {
  it('step as their models do', async () => {
    const rows = randomInputs(design, 14, 1000, (_, chance, cycle) => ({
      rst: cycle === 0 || chance(200) ? 1 : 0,
      load: chance(50) ? 1 : 0,
      down: (cycle >> 5) & 1,
    }));
    await expectModel(design, counters, rows);
  });

  it('have the periods that their theory gives', async () => {
    const rows: Values[] = Array.from({ length: 257 }, (_, cycle) => ({
      rst: cycle === 0 ? 1 : 0,
      enable: 1,
      steps: 1,
    }));
    await onEveryEngine(design, rows, (read, engine) => {
      const periodOf = (port: string) => {
        const values = rows.slice(1).map((_, cycle) => read(port, cycle + 1));
        return values.findIndex((value, i) => i > 0 && value === values[0]);
      };
      // x^8 + x^6 + x^5 + x^4 + 1 and x^5 + x^3 + 1 are primitive (from memory).
      expect(periodOf('fibonacci'), engine).toBe(255);
      expect(periodOf('galois'), engine).toBe(31);
      expect(periodOf('gray'), engine).toBe(16);
      expect(periodOf('johnson'), engine).toBe(10);
      const gray = rows.slice(1, 40).map((_, cycle) => read('gray', cycle + 1));
      for (const [i, value] of gray.slice(1).entries()) {
        expect((value ^ gray[i]!).toString(2).replaceAll('0', '')).toBe('1');
      }
    });
  });

  it('come back into the cycle of the twisted ring from any state outside of it', async () => {
    const inCycle = Array.from({ length: 10 }, (_, i) =>
      i < 5 ? (1 << i) - 1 : 31 & ~((1 << (i - 5)) - 1),
    );
    const engine = await createEngine(design, 'wasm');
    for (let start = 0; start < 32; start++) {
      const state = powerUpState(design.circuit, 'zero');
      design.layout.stateNames.forEach((name, i) => {
        const bit = /^johnson\[(\d)\]$/.exec(name)?.[1];
        if (bit !== undefined) state[i] = (start >> Number(bit)) & 1;
      });
      engine.reset(state);
      const read = readingOf(engine, [{ rst: 0, enable: 1 }, {}]);
      const next = inCycle[(inCycle.indexOf(start) + 1) % 10];
      expect([read('johnson', 0), read('johnson', 1)]).toEqual([
        start,
        inCycle.includes(start) ? next : 0,
      ]);
    }
  });
});
