import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { play } from '../support/rows.js';
import { binary, circuitFrom, onEachEngine, responseTo } from './courses.js';

const repeated = (row: string, times: number): string[] => Array.from({ length: times }, () => row);
const joined = (rows: readonly string[]): string[] => rows.map((row) => row.replaceAll(' ', ''));
const distance = (a: string, b: string): number =>
  Array.from(a).filter((bit, i) => bit !== b[i]).length;

describe('the Gray counter', () => {
  // Bit i toggles where the bits below read 10…0 and the parity is even; the lowest at even parity
  // (F. Gray, "Pulse code communication", US patent 2632058, 1953). With a parity flip-flop.
  const counter = circuitFrom(
    `OUTPUT(g3) OUTPUT(g2) OUTPUT(g1) OUTPUT(g0)
     odd = DFF(even)   even = NOT(odd)
     g0 = DFF(d0)   d0 = XOR(g0, even)
     g1 = DFF(d1)   t1 = AND(odd, g0)            d1 = XOR(g1, t1)
     n0 = NOT(g0)   n1 = NOT(g1)
     g2 = DFF(d2)   t2 = AND(odd, g1, n0)        d2 = XOR(g2, t2)
     g3 = DFF(d3)   t3 = AND(odd, n1, n0)        d3 = XOR(g3, t3)`,
    'gray.bench',
  );

  it('goes through the reflected code of 4 bits', async () => {
    const codes = Array.from({ length: 40 }, (_, i) => binary((i % 16) ^ ((i % 16) >> 1), 4));
    expect(joined(await responseTo(counter, repeated('', 40)))).toEqual(codes);
  });

  it('changes one bit a cycle, over the end of the code too', async () => {
    const codes = joined(await responseTo(counter, repeated('', 40)));
    const steps = codes.slice(1).map((code, i) => distance(codes[i]!, code));
    expect(steps).toEqual(steps.map(() => 1));
  });
});

describe('the Johnson counter', () => {
  const plain = `
    OUTPUT(q0) OUTPUT(q1) OUTPUT(q2) OUTPUT(q3)
    q0 = DFF(n3) q1 = DFF(q0) q2 = DFF(q1) q3 = DFF(q2) n3 = NOT(q3)`;
  const cycle = ['0000', '1000', '1100', '1110', '1111', '0111', '0011', '0001'];

  it('fills with ones and then with zeros', async () => {
    const response = await responseTo(circuitFrom(plain, 'johnson.bench'), repeated('', 20));
    expect(joined(response)).toEqual(Array.from({ length: 20 }, (_, i) => cycle[i % 8]));
  });

  it('stays outside its cycle where it starts outside', async () => {
    const design = designOf(circuitFrom(plain, 'johnson.bench'));
    const other = ['0100', '1010', '1101', '0110', '1011', '0101', '0010', '1001'];
    await onEachEngine(design, 'zero', (engine, name) => {
      engine.reset(Uint8Array.of(0, 1, 0, 0));
      expect(joined(play(engine, repeated('', 16))), name).toEqual([...other, ...other]);
    });
  });

  // 0 into the first bit also where the last is 0 and the one before it is 1.
  it('with a gate that corrects it comes to its cycle from every state', async () => {
    const corrected = plain.replace('q2 = DFF(q1)', 'q2 = DFF(c)');
    const text = `${corrected} e = OR(q0, q2) c = AND(q1, e)`;
    const design = designOf(circuitFrom(text, 'johnson.bench'));
    await onEachEngine(design, 'zero', (engine, name) => {
      for (let state = 0; state < 16; state++) {
        engine.reset(Uint8Array.from(binary(state, 4), Number));
        const course = joined(play(engine, repeated('', 24))).slice(-8);
        const start = cycle.indexOf(course[0]!);
        expect(course, `${name} from ${state}`).toEqual(
          cycle.map((_, i) => cycle[(start + i) % 8]),
        );
      }
    });
  });
});
