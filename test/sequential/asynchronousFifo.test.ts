import { describe, expect, it } from 'vitest';
import type { ClockTiming } from '../../compiler/circuit/clockSchedule.js';
import { powerUpState } from '../../compiler/circuit/powerUp.js';
import { designOf } from '../../compiler/compile.js';
import { wasmEngineOf } from '../support/engines.js';
import { playValues } from '../support/portValues.js';
import { randomRows, responseOf } from '../support/responses.js';
import { binary, circuitFrom, responseTo } from './courses.js';
import { type EventModel, eventList } from './eventList.js';

// Eight places; each side has a pointer of 4 bits, also in Gray code, which the other side reads
// through two flip-flops (the method of C. E. Cummings, "Simulation and synthesis techniques for
// asynchronous FIFO design", SNUG 2002). The writer writes the numbers 0, 1, 2, …; the reader
// notes any that is not the next one.
const fifo = circuitFrom(`
  module pointer (input clk, move, input [3:0] far_gray, output reg [3:0] place, gray, seen);
    reg [3:0] between;
    wire [3:0] next = place + move;
    always @(posedge clk) begin
      place <= next;
      gray <= next ^ (next >> 1);
      between <= far_gray;
      seen <= between;
    end
  endmodule

  module fifo (input wclk, rclk, put, take,
      output full, empty, output reg [15:0] written, taken, output [15:0] head, output reg fault);
    wire [3:0] wplace, wgray, wseen, rplace, rgray, rseen;
    reg [15:0] store [0:7];
    assign full = wgray == {~wseen[3:2], wseen[1:0]};
    assign empty = rgray == rseen;
    wire writes = put & ~full;
    wire reads = take & ~empty;
    pointer w (wclk, writes, rgray, wplace, wgray, wseen);
    pointer r (rclk, reads, wgray, rplace, rgray, rseen);
    assign head = store[rplace[2:0]];
    always @(posedge wclk) if (writes) begin
      store[wplace[2:0]] <= written;
      written <= written + 1;
    end
    always @(posedge rclk) if (reads) begin
      taken <= taken + 1;
      if (head != taken) fault <= 1;
    end
  endmodule`);

/** The same as a program, with queues of what is under way for the synchronizers. */
function model(): EventModel<string> {
  let [put, take] = [false, false];
  let [written, taken] = [0, 0];
  // Places that each side knows of the other: through the second and the first flip-flop.
  let [wSeen, wBetween, rSeen, rBetween] = [0, 0, 0, 0];
  const isFull = (): boolean => written - wSeen === 8;
  const isEmpty = (): boolean => rSeen === taken;
  return {
    inputs: (row) => {
      [put, take] = [row[0] === '1', row[1] === '1'];
    },
    clocks: (rose) => {
      const before = { written, taken, writes: put && !isFull(), reads: take && !isEmpty() };
      if (rose('wclk')) {
        [wSeen, wBetween] = [wBetween, before.taken];
        if (before.writes) written++;
      }
      if (rose('rclk')) {
        [rSeen, rBetween] = [rBetween, before.written];
        if (before.reads) taken++;
      }
    },
    sample: () =>
      `${Number(isFull())} ${Number(isEmpty())} ${binary(written, 16)} ${binary(taken, 16)}`,
  };
}

const timings = (write: number, read: number, isSwapped = false): ClockTiming[] => {
  const both = [
    { port: 'wclk', period: write, offset: 0 },
    { port: 'rclk', period: read, offset: 1 },
  ];
  return isSwapped ? both.reverse() : both;
};

const periods = [
  [5, 7],
  [9, 4],
  [2, 13],
  [11, 3],
] as const;

describe('a FIFO between two clocks', () => {
  it.each(periods.slice(0, 3))(
    'does what its model does, with periods %i and %i',
    async (write, read) => {
      for (const isSwapped of [false, true]) {
        const clocks = timings(write, read, isSwapped);
        const random = randomRows(designOf(fifo).layout, 8 * write + read, 400);
        // All is put, then any of the two is done, then all is taken.
        const rows = Array.from(random, (word, cycle) =>
          cycle < 100 ? '10' : cycle < 300 ? binary(word & 3, 2) : '01',
        );
        const response = await responseTo(fifo, rows, { timings: clocks });
        const shown = response.map((row) => row.split(' ').slice(0, 4).join(' '));
        expect(shown).toEqual(eventList(clocks, rows, model()));
        const flags = new Set(shown.map((row) => row.slice(0, 3)));
        expect([...flags]).toEqual(expect.arrayContaining(['0 0', '0 1', '1 0']));
      }
    },
  );

  it.each(periods)(
    'loses and doubles nothing in 200,000 cycles, with periods %i and %i',
    async (write, read) => {
      const design = designOf(fifo, { timings: timings(write, read) });
      const engine = await wasmEngineOf(design);
      engine.reset(powerUpState(fifo, 'zero'));
      responseOf(engine, 200_000, randomRows(design.layout, write, 200_000));
      const rest = Array.from({ length: 100 }, () => ({ put: 0, take: 1 }));
      const end = playValues(engine, rest);
      expect(end('fault', 99)).toBe(0n);
      expect(end('taken', 99)).toBe(end('written', 99));
      expect([end('empty', 99), end('full', 99)]).toEqual([1n, 0n]);
      expect(end('written', 99)).toBeGreaterThan(0n);
    },
  );
});
