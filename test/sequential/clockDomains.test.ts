import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ClockTiming } from '../../compiler/circuit/clockSchedule.js';
import { RandomBits } from '../../runtime/random.js';
import { cells } from '../published/partsCells.js';
import { binary, circuitFrom, expectCourse, responseTo } from './courses.js';
import { type EventModel, eventList } from './eventList.js';

const timing = (port: string) =>
  fc
    .record({ period: fc.integer({ min: 2, max: 11 }), offset: fc.nat(10) })
    .map(({ period, offset }): ClockTiming => ({ port, period, offset: offset % period }));

const randomRows = (bits: number, count: number, seed: number): string[] => {
  const random = new RandomBits(seed);
  return Array.from({ length: count }, () =>
    bits === 0 ? '' : binary(random.next() >>> (32 - bits), bits),
  );
};

/** Expects a circuit to do what a model does for clocks a and b of any periods and offsets. */
async function expectModel(
  text: string,
  modelOf: () => EventModel<string>,
  { inputs = 0, numRuns = 20 },
): Promise<void> {
  const circuit = circuitFrom(text);
  await fc.assert(
    fc.asyncProperty(
      timing('a'),
      timing('b'),
      fc.boolean(),
      fc.nat(1e6),
      async (a, b, isSwapped, seed) => {
        const timings = isSwapped ? [b, a] : [a, b];
        const rows = randomRows(inputs, 60, seed);
        const response = await responseTo(circuit, rows, { timings });
        expect(response).toEqual(eventList(timings, rows, modelOf()));
      },
    ),
    { seed: 44, numRuns },
  );
}

describe('two clocks', () => {
  const crossing = `module crossing (input a, b, d, output reg p, q, r, s);
    always @(posedge a) p <= q ^ d;
    always @(posedge b) q <= ~p;
    always @(negedge a) r <= q;
    always @(negedge b) s <= p ^ r;
  endmodule`;

  // By hand: a rises at 0 6 12 18 …, falls at 3 9 15 21 …; b rises at 1 5 9 13 17 21 …, falls at
  // 3 7 11 15 19 …. Sampled at 0 6 12 18, d = 0 throughout, all from 0:
  //   0 a+ p=q=0          1 b+ q=1      3 a- b- r=1 s=p^r=0 (before)  5 b+ q=1
  //   6 a+ p=1            7 b- s=p^r=0  9 a- r=1, b+ q=0             11 b- s=0
  //  12 a+ p=0           13 b+ q=1     15 a- r=1, b- s=1             17 b+ q=1
  //  18 a+ p=1           19 b- s=0     21 a- r=1, b+ q=0             23 b- s=0
  it('meet as in a list of events by hand', () =>
    expectCourse(
      circuitFrom(crossing),
      '0 : 0000 // p q r s\n0 : 0110\n0 : 1010\n0 : 0111\n0 : 1010',
      {
        timings: [
          { port: 'a', period: 6, offset: 0 },
          { port: 'b', period: 4, offset: 1 },
        ],
      },
    ));

  it('of any periods and offsets meet as in a list of events', () =>
    expectModel(
      crossing,
      () => {
        let [d, p, q, r, s] = [0, 0, 0, 0, 0];
        return {
          inputs: (row) => {
            d = Number(row);
          },
          clocks: (rose, fell) => {
            [p, q, r, s] = [
              rose('a') ? q ^ d : p,
              rose('b') ? 1 - p : q,
              fell('a') ? q : r,
              fell('b') ? p ^ r : s,
            ];
          },
          sample: () => `${p} ${q} ${r} ${s}`,
        };
      },
      { inputs: 1 },
    ));
});

describe('a clock multiplexer', () => {
  // A change of the select can be an edge itself; it captures what the data were before it.
  it('clocks by the chosen clock, and by the choice', () =>
    expectModel(
      `module multiplexer (input a, b, select, d, output reg q, output reg [3:0] count);
        assign chosen = select ? b : a;
        always @(posedge chosen) begin q <= d; count <= count + 1; end
        // These tell which inputs are clocks.
        reg of_a, of_b;
        always @(posedge a) of_a <= 0;
        always @(posedge b) of_b <= 0;
      endmodule`,
      () => {
        let [select, d, q, count] = ['0', '0', '0', 0];
        let chosen = false;
        let isFirst = true;
        const move = (now: boolean, data: string) => {
          // The first row establishes levels; what it brings about is no edge.
          if (now && !chosen && !isFirst) {
            q = data;
            count = (count + 1) % 16;
          }
          [chosen, isFirst] = [now, false];
        };
        return {
          inputs: (row, high) => {
            const before = d;
            [select, d] = [row[0]!, row[1]!];
            move(high(select === '1' ? 'b' : 'a'), before);
          },
          clocks: (_rose, _fell, high) => move(high(select === '1' ? 'b' : 'a'), d),
          sample: () => `${q} ${binary(count, 4)}`,
        };
      },
      { inputs: 2 },
    ));
});

describe('a clock', () => {
  it('is data for the registers of another', () =>
    expectModel(
      `module sampled (input a, b, output reg level, other, output reg [1:0] seen);
        always @(posedge b) begin level <= a; seen <= {seen[0], a}; end
        always @(posedge a) other <= b;
      endmodule`,
      () => {
        let [level, other, seen] = [false, false, '00'];
        let last = (_: string): boolean => false;
        return {
          inputs: (_, high) => {
            last = high;
          },
          clocks: (rose, _, high) => {
            if (rose('a')) other = last('b');
            if (rose('b')) {
              level = last('a');
              seen = seen[1]! + Number(level);
            }
            last = high;
          },
          sample: () => `${Number(level)} ${Number(other)} ${seen}`,
        };
      },
      {},
    ));

  it('is data for its own flip-flops: low before its rising edge, high before its falling one', () =>
    expectCourse(
      circuitFrom(`${cells}
        module own (input clk, output up, down);
          not (clk_n, clk);
          rising_d one (up, clk, clk), two (down, clk_n, clk);
        endmodule`),
      ': 11\n: 01\n: 01',
      { powerUp: 'one' },
    ));

  // IEEE 1364-2005, 9.7.2: what waits for the edge goes on after it.
  it('has its new level in a block that waits for its edge', () =>
    expectCourse(
      circuitFrom(`module own (input clk, output reg up, down);
        always @(posedge clk) up <= clk;
        always @(negedge clk) down <= clk;
      endmodule`),
      ': 00\n: 10\n: 10',
      {},
    ));
});

describe('sampling on both edges', () => {
  const sampler = `
    // Data that change with the clock b are taken at both edges of a and leave in pairs.
    module both (input a, b, d, output reg [1:0] pair, output out);
      reg source, rising, falling;
      always @(posedge b) source <= d ^ source;
      always @(posedge a) rising <= source;
      always @(negedge a) falling <= source;
      always @(posedge a) pair <= {rising, falling};
      assign out = a ? rising : falling;
    endmodule`;

  it('takes two data a period', () =>
    expectModel(
      sampler,
      () => {
        let [d, source, rising, falling] = [0, 0, 0, 0];
        let pair = '00';
        let isHigh = false;
        return {
          inputs: (row, high) => {
            d = Number(row);
            isHigh = high('a');
          },
          clocks: (rose, fell, high) => {
            const before = { source, rising, falling };
            if (rose('b')) source ^= d;
            if (rose('a')) rising = before.source;
            if (fell('a')) falling = before.source;
            if (rose('a')) pair = `${before.rising}${before.falling}`;
            isHigh = high('a');
          },
          sample: () => `${pair} ${isHigh ? rising : falling}`,
        };
      },
      { inputs: 1 },
    ));
});

describe('a chain of clock dividers', () => {
  // Each stage toggles where the one before it falls; the last one clocks a register of its own.
  const chain = circuitFrom(`module chain (input clk, input [7:0] d, output half, output quarter,
      output eighth, output reg [7:0] count, taken);
    reg [2:0] stage;
    always @(posedge clk) stage[0] <= ~stage[0];
    always @(negedge stage[0]) stage[1] <= ~stage[1];
    always @(negedge stage[1]) stage[2] <= ~stage[2];
    assign {eighth, quarter, half} = stage;
    always @(posedge clk) count <= count + d;
    always @(posedge eighth) taken <= count;
  endmodule`);

  it('divides by two, four and eight, and a register on the last one sees what the edge has stored', async () => {
    const rows = randomRows(8, 300, 8);
    let [count, taken] = [0, 0];
    const expected = rows.map((row, cycle) => {
      const [eighth, quarter, half] = binary(cycle % 8, 3);
      const now = `${half} ${quarter} ${eighth} ${binary(count, 8)} ${binary(taken, 8)}`;
      count = (count + Number.parseInt(row, 2)) % 256;
      // The last stage rises in the wave after that of the counter.
      if (cycle % 8 === 3) taken = count;
      return now;
    });
    expect(await responseTo(chain, rows)).toEqual(expected);
  });

  it('by three, high for half of the time, clocks a counter every third cycle', async () => {
    const divider = circuitFrom(`module by_three (input clk, output low_part, output reg [5:0] n);
      reg [1:0] phase;
      reg late;
      always @(posedge clk) phase <= {phase[0], ~|phase};
      always @(negedge clk) late <= phase[0];
      assign third = phase[0] | late;
      assign low_part = third;
      always @(posedge third) n <= n + 1;
    endmodule`);
    const rows = Array.from({ length: 60 }, () => '');
    // The phases are 00, 01, 10 in turn; sampled with the clock low, `late` follows phase[0].
    const expected = rows.map((_, cycle) => {
      const counted = binary(Math.ceil(cycle / 3), 6);
      return `${cycle % 3 === 1 ? 1 : 0} ${counted}`;
    });
    expect(await responseTo(divider, rows)).toEqual(expected);
  });
});
