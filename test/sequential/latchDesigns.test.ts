import { describe, it } from 'vitest';
import type { ClockTiming } from '../../compiler/circuit/clockSchedule.js';
import { cells } from '../published/partsCells.js';
import { expectSameResponse } from './clocking.js';
import { circuitFrom, expectCourse } from './courses.js';

/** A machine of eight bits of which `storage` keeps the state. */
const machine = (clocks: string, storage: string) =>
  circuitFrom(`${cells}
    module machine (input ${clocks}, input [7:0] d, input turn, output [7:0] q);
      wire [7:0] next = (turn ? {q[0], q[7:1]} : q) + (d ^ {q[3:0], q[7:4]});
      ${storage}
    endmodule`);

const flipFlops = machine('clk', 'rising_d bit[7:0] (q, clk, next);');

describe('latches in pairs', () => {
  it('do what flip-flops do', async () => {
    const pairs = machine(
      'clk',
      `wire [7:0] m;
      not (low, clk);
      high_latch master[7:0] (m, low, next), slave[7:0] (q, clk, m);`,
    );
    await expectSameResponse({ circuit: flipFlops }, { circuit: pairs }, 1);
  });

  it('made of gates do what flip-flops do', async () => {
    const pairs = machine(
      'clk',
      `wire [7:0] m;
      assign m = clk ? m : next;
      assign q = clk ? m : q;
      // A loop of gates alone hangs on no clock; this register tells which input it is.
      rising_d tick (t, clk, 1'b0);`,
    );
    await expectSameResponse({ circuit: flipFlops }, { circuit: pairs }, 2);
  });

  it('on the other edge do what flip-flops on that edge do', async () => {
    const falling = machine('clk', 'not (clk_n, clk); rising_d bit[7:0] (q, clk_n, next);');
    const pairs = machine(
      'clk',
      `wire [7:0] m;
      not (low, clk);
      high_latch master[7:0] (m, clk, next), slave[7:0] (q, low, m);`,
    );
    await expectSameResponse({ circuit: falling }, { circuit: pairs }, 3);
  });
});

describe('latches on two phases', () => {
  const storage = `wire [7:0] m;
    high_latch first[7:0] (m, phi1, next), second[7:0] (q, phi2, m);`;
  const alternating = machine('phi1, phi2', storage);

  // A clock of latches alone is at rest while they are open; its active edge closes them. Here
  // phi1 is high from 0 to 4 and phi2 from 4 to 8.
  const abutting = [
    { port: 'phi1', period: 8, offset: 4 },
    { port: 'phi2', period: 8, offset: 0 },
  ];

  it('that follow each other do what flip-flops do', async () => {
    const phases = { circuit: alternating, options: { timings: abutting } };
    await expectSameResponse({ circuit: flipFlops }, phases, 4);
  });

  // With a register on its rising edge a clock rests low: phi1 is high from 1 to 5 and phi2 from 5
  // to 9, of which the last tick is the first of the next period.
  it('with a gap between do what flip-flops do', async () => {
    const ticking = machine(
      'phi1, phi2',
      `${storage} rising_d tick1 (t1, phi1, 1'b0), tick2 (t2, phi2, 1'b0);`,
    );
    const timings = [
      { port: 'phi1', period: 9, offset: 0 },
      { port: 'phi2', period: 9, offset: 4 },
    ];
    await expectSameResponse({ circuit: flipFlops }, { circuit: ticking, options: { timings } }, 5);
  });
});

describe('open latches', () => {
  const chain = circuitFrom(`${cells}
    module chain (input phi1, phi2, d, output a, b, c);
      high_latch one (a, phi1, d), two (b, phi2, a), three (c, phi1, b);
      rising_d tick1 (t1, phi1, 1'b0), tick2 (t2, phi2, 1'b0);
    endmodule`);

  it('let a value through all of them while both phases are high', () =>
    expectCourse(
      chain,
      // Both open at the edge and close when the clock returns.
      '1 : 000\n0 : 111\n0 : 000\n1 : 000\n1 : 111',
    ));

  // phi1 high 0-4, phi2 high 2-6 of 8: while both are high d reaches c in the same period.
  it('let a value through where phases overlap, and hold it afterwards', () =>
    expectCourse(chain, '1 : 000\n0 : 111\n1 : 000\n1 : 111', {
      timings: [
        { port: 'phi1', period: 8, offset: 0 },
        { port: 'phi2', period: 8, offset: 2 },
      ],
    }));

  // phi1 high 0-4, phi2 high 4-8: one latch a phase. At 0 a takes d and c takes b; at 4 b takes a.
  it('hand a value on from phase to phase where none overlap', () =>
    expectCourse(chain, '1 : 000\n0 : 110\n1 : 001\n0 : 110\n0 : 001\n1 : 000', {
      timings: [
        { port: 'phi1', period: 8, offset: 0 },
        { port: 'phi2', period: 8, offset: 4 },
      ],
    }));

  // Data that leave a flip-flop late, while the latch behind it is open already, go through to the
  // next one as if they had come in time; what comes after it has closed waits for a period.
  const borrowing = circuitFrom(`${cells}
    module borrowing (input source, phi1, phi2, d, output s, a, b);
      rising_d from (s, source, d);
      high_latch one (a, phi1, s), two (b, phi2, a);
      rising_d tick1 (t1, phi1, 1'b0), tick2 (t2, phi2, 1'b0);
    endmodule`);
  const late = (offset: number): ClockTiming[] => [
    { port: 'phi1', period: 8, offset: 0 },
    { port: 'source', period: 8, offset },
    { port: 'phi2', period: 8, offset: 4 },
  ];

  it('borrow time: data may come until the latch closes', () =>
    // Source at 2: s, a and, from 4 on, b follow d within the period.
    expectCourse(borrowing, '1 : 000\n0 : 111\n1 : 000\n1 : 111\n0 : 111', { timings: late(2) }));

  it('let no data through that come when they have closed', () =>
    // Source at 5: a takes what s was at 0, the value of the period before.
    expectCourse(borrowing, '1 : 000\n0 : 100\n1 : 011\n1 : 100\n0 : 111', { timings: late(5) }));
});
