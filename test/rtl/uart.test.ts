import { describe, expect, it } from 'vitest';
import { RandomBits } from '../../runtime/random.js';
import { anyOf, onEveryEngine, rtlDesign, type Values } from './circuits.js';

// Start-stop frames "8N1" (common practice): the line rests at 1; a start bit 0, eight data bits
// from the least significant on, one stop bit 1, all equally long.
const frameOf = (byte: number): number[] => [
  0,
  ...Array.from({ length: 8 }, (_, i) => (byte >> i) & 1),
  1,
];

const random = new RandomBits(8);
const bytes = [0x00, 0xff, 0x55, 0xc3, ...Array.from({ length: 20 }, () => random.next() & 255)];

const transmitter = (divider: number) =>
  rtlDesign(
    ['uart.v'],
    anyOf(
      'uart_tx',
      { DIVIDER: divider },
      'input clk, rst_n, valid, input [7:0] data, output ready, txd',
    ),
    'any',
  );

const receiver = (divider: number) =>
  rtlDesign(
    ['uart.v'],
    anyOf(
      'uart_rx',
      { DIVIDER: divider },
      'input clk, rst_n, rxd, output [7:0] data, output strobe, frame_error',
    ),
    'any',
  );

describe('the transmitter', () => {
  it.each([1, 3, 8])(
    'sends frames back to back and with pauses, with divider %i',
    async (divider) => {
      const design = transmitter(divider);
      const rows: Values[] = [{ rst_n: 0, valid: 0, data: 0 }];
      const line = [1, 1];
      bytes.forEach((byte, i) => {
        const pause = i % 3 === 0 ? i : 0;
        for (let k = 0; k < pause; k++) {
          rows.push({ rst_n: 1, valid: 0, data: ~byte & 255 });
          line.push(1);
        }
        // What the inputs are while a frame goes out does not matter, up to its last cycle.
        rows.push({ rst_n: 1, valid: 1, data: byte });
        for (let k = 1; k < 10 * divider; k++) rows.push({ rst_n: 1, valid: k & 1, data: k & 255 });
        line.push(...frameOf(byte).flatMap((level) => new Array<number>(divider).fill(level)));
      });
      await onEveryEngine(design, rows, (read, engine) => {
        const sent = rows.map((_, cycle) => read('txd', cycle));
        // The line is one cycle behind the inputs, and the last frame's end is not seen.
        expect(sent, engine).toEqual(line.slice(0, rows.length));
        const taken = rows.filter((row, cycle) => row.rst_n && row.valid && read('ready', cycle));
        expect(
          taken.map(({ data }) => data),
          engine,
        ).toEqual(bytes);
      });
    },
  );
});

/** Levels of a line sampled once a cycle, where a bit lasts `length` cycles, perhaps no whole ones. */
class Line {
  readonly levels: number[] = [];
  #end = 0;

  hold(level: number, length: number): void {
    this.#end += length;
    while (this.levels.length + 0.5 < this.#end) this.levels.push(level);
  }

  get rows(): Values[] {
    return [{ rst_n: 0, rxd: 1 }, ...this.levels.map((rxd) => ({ rst_n: 1, rxd }))];
  }
}

describe('the receiver', () => {
  it.each([
    [4, 4],
    [7, 7],
    [16, 16],
    [16, 15.4],
    [16, 16.6],
  ])('receives frames with divider %i where a bit lasts %f cycles', async (divider, length) => {
    const line = new Line();
    line.hold(1, 5);
    bytes.forEach((byte, i) => {
      for (const level of frameOf(byte)) line.hold(level, length);
      line.hold(1, i % 4 === 0 ? 0.3 * i : i % 4 === 1 ? 2 * length : 0);
    });
    line.hold(1, 2 * length);
    const { rows } = line;
    await onEveryEngine(receiver(divider), rows, (read, engine) => {
      const strobes = rows.flatMap((_, cycle) =>
        read('strobe', cycle) ? [read('data', cycle)] : [],
      );
      expect(strobes, engine).toEqual(bytes);
      expect(
        rows.some((_, cycle) => read('frame_error', cycle) === 1),
        engine,
      ).toBe(false);
    });
  });

  it('takes no start bit that is too short, and tells of a stop bit that is 0', async () => {
    const line = new Line();
    line.hold(1, 20);
    line.hold(0, 6);
    line.hold(1, 60);
    for (const level of frameOf(0x9a).slice(0, 9)) line.hold(level, 16);
    line.hold(0, 13);
    line.hold(1, 200);
    for (const level of frameOf(0x3c)) line.hold(level, 16);
    line.hold(1, 40);
    const { rows } = line;
    await onEveryEngine(receiver(16), rows, (read, engine) => {
      const events = rows.flatMap((_, cycle) => {
        const data = read('data', cycle).toString(16);
        if (read('strobe', cycle)) return [data];
        return read('frame_error', cycle) ? [`bad ${data}`] : [];
      });
      expect(events, engine).toEqual(['bad 9a', '3c']);
    });
  });
});

describe('a transmitter that talks to a receiver', () => {
  it('hands over what it is given, in order', async () => {
    const design = rtlDesign(['uart.v']);
    const chance = new RandomBits(9);
    const rows: Values[] = Array.from({ length: 1000 }, (_, cycle) => ({
      rst_n: cycle > 0 ? 1 : 0,
      valid: cycle > 0 && cycle < 900 && chance.next() % 20 === 0 ? 1 : 0,
      data: chance.next() & 255,
    }));
    await onEveryEngine(design, rows, (read, engine) => {
      const given = rows.filter((row, cycle) => row.valid && read('ready', cycle));
      const got = rows.flatMap((_, cycle) =>
        read('strobe', cycle) ? [read('received', cycle)] : [],
      );
      expect(got.length).toBeGreaterThan(10);
      expect(got, engine).toEqual(given.map(({ data }) => data));
    });
  });
});
