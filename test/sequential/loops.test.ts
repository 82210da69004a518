import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { RunFault } from '../../runtime/engine.js';
import { RandomBits } from '../../runtime/random.js';
import { play } from '../support/rows.js';
import { binary, circuitFrom, expectCourse, onEachEngine, responseTo } from './courses.js';

describe('a ring of three inverters', () => {
  const ring = circuitFrom(
    `module ring (input run, output y);
      wire a, b;
      nand (a, run, y);
      not (b, a);
      not (y, b);
    endmodule`,
    'ring.v',
  );

  it('is refused in the cycle in which it starts, with its nets and lines', async () => {
    await onEachEngine(designOf(ring), 'zero', (engine, name) => {
      let fault: unknown;
      try {
        play(engine, ['0', '0', '0', '1', '0']);
      } catch (error) {
        fault = error;
      }
      expect(fault, name).toBeInstanceOf(RunFault);
      const { completed, message } = fault as RunFault;
      expect(completed, name).toBe(3);
      const nets = message.slice(message.lastIndexOf(': ') + 2).split(', ');
      expect(nets.sort(), name).toEqual(['a (ring.v:3)', 'b (ring.v:4)', 'y (ring.v:5)']);
    });
  });

  it('runs again from a power-up', async () => {
    await onEachEngine(designOf(ring), 'zero', (engine, name) => {
      const start = engine.state();
      expect(() => play(engine, ['1']), name).toThrow(RunFault);
      engine.reset(start);
      expect(play(engine, ['0', '0']), name).toEqual(['1', '1']);
    });
  });

  it('becomes x in a three-valued run, until it is stopped', () =>
    expectCourse(ring, '0 : 1\n1 : x\n1 : x\n0 : 1\nx : x\n0 : 1', { threeValued: true }));

  it('holds its value with a fourth one', () =>
    expectCourse(
      circuitFrom(`module even (input set, clear, output y);
        nor (a, set, y), (b, clear, a); not (c, b), (y, c); endmodule`),
      '1 0 : 1\n0 0 : 1\n0 1 : 0\n0 0 : 0\n1 0 : 1',
    ));
});

describe('a loop that no input closes', () => {
  // Two functions shared in both orders, after the example in S. Malik, "Analysis of cyclic
  // combinational circuits", IEEE Trans. CAD 13(7), 1994: c ? f(g(x)) : g(f(x)).
  const functions = `
    module f (input [3:0] x, output [3:0] y); assign y = {x[2:0], x[3] ^ x[0]}; endmodule
    module g (input [3:0] x, output [3:0] y); assign y = x + 4'd5; endmodule`;
  const cyclic = circuitFrom(`${functions}
    module shared (input c, input [3:0] x, output [3:0] y);
      wire [3:0] to_f, to_g, from_f, from_g;
      assign to_f = c ? from_g : x;
      assign to_g = c ? x : from_f;
      f one (to_f, from_f);
      g two (to_g, from_g);
      assign y = c ? from_f : from_g;
    endmodule`);
  const twin = circuitFrom(`${functions}
    module twin (input c, input [3:0] x, output [3:0] y);
      wire [3:0] f1, f2, g1, g2;
      f a (x, f1); g b (f1, g2);
      g c1 (x, g1); f d (g1, f2);
      assign y = c ? f2 : g2;
    endmodule`);
  const random = new RandomBits(1994);
  const rows = Array.from({ length: 2000 }, () => binary(random.next() & 31, 5));

  it('settles as its twin without a loop', async () => {
    expect(await responseTo(cyclic, rows)).toEqual(await responseTo(twin, rows));
  });

  it('knows what its twin knows, however it starts', async () => {
    // In every other row a bit of the data is unknown; the select is always known.
    const some = rows.map((row, i) => (i % 2 ? row.replace(/.$/, 'x') : row)).slice(0, 500);
    const options = { threeValued: true };
    expect(await responseTo(cyclic, some, options)).toEqual(await responseTo(twin, some, options));
  });
});

describe('a bus of segments that pass a value on to either side', () => {
  // Whatever the order of evaluation, one direction takes a round for each segment.
  const count = 12;
  const segments = circuitFrom(`
    module segments (input up, input [${count - 1}:0] driven, value, output [${count - 1}:0] y);
      assign y = (driven & value) | (~driven & (up ? {y[${count - 2}:0], 1'b0} : y >> 1));
    endmodule`);
  /** A segment takes the value of the next driven one on the side that values come from. */
  const valuesOf = (up: boolean, driven: number, value: number): string => {
    const segment = (i: number): number => {
      for (let at = i; at >= 0 && at < count; at += up ? -1 : 1) {
        if ((driven >>> at) & 1) return (value >>> at) & 1;
      }
      return 0;
    };
    return Array.from({ length: count }, (_, i) => segment(count - 1 - i)).join('');
  };
  const random = new RandomBits(12);
  const cases = Array.from({ length: 300 }, (_, i) => {
    const some = (times: number): number =>
      Array.from({ length: times }, () => random.next() & 0xfff).reduce((a, b) => a & b);
    const ends = i % 2 === 0 ? 1 : 1 << (count - 1);
    const driven = i % 3 === 0 ? ends : some(1 + (i % 4));
    return { up: i % 5 < 2, driven, value: random.next() & 0xfff };
  });
  const rows = cases.map(
    ({ up, driven, value }) => `${Number(up)} ${binary(driven, count)} ${binary(value, count)}`,
  );
  const expected = cases.map(({ up, driven, value }) => valuesOf(up, driven, value));

  it('settles however far the values go', async () => {
    expect(await responseTo(segments, rows)).toEqual(expected);
  });

  it('is given 16 rounds, which may be too few, where it leads through a memory', async () => {
    const design = designOf(
      circuitFrom(`
        module stored (input clk, we, up, input [23:0] driven, value, output [23:0] y);
          reg m [0:511]; initial begin m[0] = 0; m[1] = 1; end
          always @(posedge clk) if (we) m[{9{up}}] <= ~up;
          wire [23:0] near = up ? {y[22:0], 1'b0} : y >> 1;
          wire [23:0] through = {near[23:13], m[near[12]], near[11:0]};
          assign y = (driven & value) | (~driven & through);
        endmodule`),
    );
    // From one end to the other, once in each direction.
    const courses = [
      `0 1 ${binary(1, 24)} ${binary(1, 24)}`,
      `0 0 1${binary(0, 23)} ${binary(0, 24)}`,
    ];
    await onEachEngine(design, 'zero', (engine, name) => {
      const run = (): string[] => play(engine, courses);
      if (name === 'reference') expect(run()).toEqual(['1'.repeat(24), '0'.repeat(24)]);
      else expect(run, name).toThrow('in 16 rounds, and only the reference engine makes more: ');
    });
  });
});

describe('the Muller pipeline', () => {
  // Each stage takes over the stage before it where the stage after it has the other value (D. E.
  // Muller; J. Sparsø, S. Furber, "Principles of Asynchronous Circuit Design", 2001, chapter 2).
  const pipeline = circuitFrom(`
    module c_element (input a, b, output c);
      and (ab, a, b), (ac, a, c), (bc, b, c);
      or (c, ab, ac, bc);
    endmodule
    module pipeline (input req, ack, output [1:4] s);
      wire [1:4] n;
      not inverted[1:4] (n, {s[2:4], ack});
      c_element stage[1:4] ({req, s[1:3]}, n, s);
    endmodule`);

  it('fills to a token in every other stage while nobody takes them', () =>
    expectCourse(
      pipeline,
      `// req ack : stages
      0 0 : 0000
      1 0 : 1111
      0 0 : 0001
      1 0 : 1101
      0 0 : 0101
      1 0 : 0101 // full: the request waits
      1 1 : 1010 // the last one is taken, the others move up
      1 0 : 1101 // and there is room for the request
      0 0 : 0101`,
    ));

  it('ends in one state whatever the order of its stages', async () => {
    const random = new RandomBits(4);
    const rows = ['00', ...Array.from({ length: 1500 }, () => binary(random.next() & 3, 2))];
    expect(await responseTo(pipeline, rows)).toEqual(settledInAnyOrder(rows, random));
  });
});

/** Stages that may change do so one at a time, any of them first, until none may. */
function settledInAnyOrder(rows: readonly string[], random: RandomBits): string[] {
  const stages = [0, 0, 0, 0];
  return rows.map((row) => {
    const [req, ack] = Array.from(row, Number) as [number, number];
    const may = (i: number): boolean => {
      const before = i === 0 ? req : stages[i - 1]!;
      const after = i === 3 ? ack : stages[i + 1]!;
      return before !== after && stages[i] !== before;
    };
    for (;;) {
      const ready = [0, 1, 2, 3].filter(may);
      if (ready.length === 0) return stages.join('');
      const chosen = ready[random.next() % ready.length]!;
      stages[chosen] = 1 - stages[chosen]!;
    }
  });
}
