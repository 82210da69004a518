import { describe, expect, it } from 'vitest';
import { designOf } from '../../compiler/compile.js';
import { RandomBits } from '../../runtime/random.js';
import { binary, circuitFrom, expectCourse, onEachEngine } from '../sequential/courses.js';
import { play } from '../support/rows.js';

// E. B. Eichelberger, "Hazard detection in combinational and sequential switching circuits", IBM
// Journal of Research and Development 9(2), 1965: an input in change is x; what is x while it
// changes has a hazard. What may follow is told by all orders in which gates can change (J. A.
// Brzozowski, C.-J. H. Seger, "Asynchronous Circuits", 1995). Examples of our own.

const ternary = { threeValued: true };

describe('an input in change', () => {
  const sumOfProducts = (terms: string, products: string) =>
    circuitFrom(`module t (input a, b, c, output y);
      not (a_n, a); and (p, a, b), (q, a_n, c); ${terms} or (y, ${products}); endmodule`);

  it('makes a function x that it does not change, where no term holds it', () =>
    expectCourse(
      sumOfProducts('', 'p, q'),
      '0 1 1 : 1\nx 1 1 : x\n1 1 1 : 1\nx 0 0 : 0\nx 1 0 : x',
      ternary,
    ));

  it('does not where a term covers both of its values', () =>
    expectCourse(
      sumOfProducts('and (r, b, c);', 'p, q, r'),
      '0 1 1 : 1\nx 1 1 : 1\n1 1 1 : 1\nx 0 0 : 0\nx 1 0 : x',
      ternary,
    ));

  it('leaves a loop as it was where it holds through the change, and x where it may not', async () => {
    const latch = (terms: string, products: string) =>
      circuitFrom(`module t (input g, d, output q);
        not (g_n, g); and (p, g, d), (k, g_n, q); ${terms} or (q, ${products}); endmodule`);
    const course = (x: string) => `1 1 : 1\nx 1 : ${x}\n0 1 : ${x}\n1 0 : 0\nx 0 : 0\n0 0 : 0`;
    await expectCourse(latch('', 'p, k'), course('x'), ternary);
    await expectCourse(latch('and (h, d, q);', 'p, k, h'), course('1'), ternary);
  });
});

describe('a loop that does not settle', () => {
  it('becomes x, and what it cannot reach stays known', () =>
    expectCourse(
      circuitFrom(`module t (input run, a, output y, masked, held, sticky);
        nand (y, run, z); buf (z, y);
        and (masked, y, a);
        nor (held, a, held_n), (held_n, run, held);
        or (sticky, y_n, sticky_or), (sticky_or, sticky, 1'b0);
        not (y_n, y);
      endmodule`),
      `// run a : y masked held sticky
      0 1 : 1 1 0 x
      1 0 : x 0 1 x
      1 1 : x x 0 x
      0 1 : 1 1 0 x
      0 0 : 1 0 0 x`,
      ternary,
    ));

  it('makes a latch that it may set x until something decides', () =>
    expectCourse(
      circuitFrom(`module t (input run, clear, output y, q);
        nand (y, run, y);
        not (pulse, y);
        nor (q, clear, q_n), (q_n, pulse, q);
      endmodule`),
      '0 1 : 1 0\n0 0 : 1 0\n1 0 : x x\n0 0 : 1 x\n0 1 : 1 0\n0 0 : 1 0',
      ternary,
    ));
});

const GATES = 5;
const INPUTS = 2;
const kinds = {
  nand: (a: number, b: number) => 1 - (a & b),
  nor: (a: number, b: number) => 1 - (a | b),
  and: (a: number, b: number) => a & b,
  or: (a: number, b: number) => a | b,
  xor: (a: number, b: number) => a ^ b,
  xnor: (a: number, b: number) => 1 - (a ^ b),
};

interface Network {
  readonly text: string;
  /** The gates that are not at rest in a state, for some inputs: bit i for gate i. */
  readonly unstable: (state: number, inputs: number) => number;
}

/** Gates of any kind, each reading two of all gates and inputs. Bit i of a state is gate i. */
function randomNetwork(random: RandomBits): Network {
  const names = Object.keys(kinds) as (keyof typeof kinds)[];
  const gates = Array.from({ length: GATES }, () => ({
    kind: names[random.next() % names.length]!,
    reads: [random.next() % (GATES + INPUTS), random.next() % (GATES + INPUTS)] as const,
  }));
  const net = (i: number): string => (i < GATES ? `y[${i}]` : `a[${i - GATES}]`);
  const lines = gates.map(
    ({ kind, reads }, i) => `${kind} (y[${i}], ${net(reads[0])}, ${net(reads[1])});`,
  );
  return {
    text: `module t (input [1:0] a, output [4:0] y); ${lines.join(' ')} endmodule`,
    unstable: (state, inputs) => {
      const values = state | (inputs << GATES);
      const next = gates.map(({ kind, reads: [p, q] }) =>
        kinds[kind]((values >> p) & 1, (values >> q) & 1),
      );
      return next.reduce((bits, value, i) => bits | ((value ^ ((state >> i) & 1)) << i), 0);
    },
  };
}

/** All states that gates can reach, changing one or several at a time in any order. */
function reachable({ unstable }: Network, from: number, inputs: number): Set<number> {
  const reached = new Set([from]);
  for (const state of reached) {
    const moving = unstable(state, inputs);
    for (let some = moving; some > 0; some = (some - 1) & moving) reached.add(state ^ some);
  }
  return reached;
}

/** States to which the network comes back again and again: all that can be reached can be left for. */
function lasting(network: Network, from: number, inputs: number): number[] {
  return [...reachable(network, from, inputs)].filter((state) =>
    [...reachable(network, state, inputs)].every((next) =>
      reachable(network, next, inputs).has(state),
    ),
  );
}

describe('gates that read one another in any way', () => {
  it('end, where they end, in a state that they can reach; and what is known holds in any order', async () => {
    const random = new RandomBits(1965);
    const counts = { settled: 0, unknown: 0, known: 0 };
    for (let run = 0; run < 60; run++) {
      const network = randomNetwork(random);
      const rows = Array.from({ length: 40 }, () => binary(random.next() & 3, 2));
      const design = designOf(circuitFrom(network.text), ternary);
      const start = Uint8Array.from(design.layout.stateNames, () => random.next() & 1);
      let expected: string[] | undefined;
      await onEachEngine(design, 'unknown', (engine, name) => {
        engine.reset(start);
        const response = play(engine, rows);
        expected ??= response;
        expect(response, name).toEqual(expected);
      });
      expected!.forEach((now, i) => {
        const before = expected![i - 1];
        if (before === undefined || before.includes('x')) return;
        const from = Number.parseInt(before, 2);
        const inputs = Number.parseInt(rows[i]!, 2);
        if (!now.includes('x')) {
          counts.settled++;
          const state = Number.parseInt(now, 2);
          expect(network.unstable(state, inputs), network.text).toBe(0);
          expect(reachable(network, from, inputs), network.text).toContain(state);
          return;
        }
        counts.unknown++;
        for (const state of lasting(network, from, inputs)) {
          const shown = binary(state, GATES);
          const agreed = [...now].map((value, bit) => (value === 'x' ? 'x' : shown[bit]));
          counts.known += agreed.filter((value) => value !== 'x').length;
          expect(agreed.join(''), `${network.text} ${before} ${rows[i]}`).toBe(now);
        }
      });
    }
    // Each of the claims has been put to the test.
    for (const count of Object.values(counts)) expect(count).toBeGreaterThan(20);
  });
});
