import { describe, expect, test } from 'vitest';
import { uart } from '../../../benchmarks/circuits/uart.js';
import { verilog } from '../../../benchmarks/circuits/verilog.js';
import { type Evaluator, evaluate } from './evaluate.js';

function reset(divider: number): Evaluator {
  const circuit = evaluate(verilog(uart(divider)));
  circuit.set('rx', 1);
  circuit.set('reset', 1);
  circuit.clock();
  circuit.set('reset', 0);
  return circuit;
}

/** The line in each cycle for bytes sent as start bit, data from the lowest bit, stop bit. */
function frames(bytes: readonly number[], divider: number): number[] {
  const bits = bytes.flatMap((byte) => [0, ...[...Array(8).keys()].map((i) => (byte >> i) & 1), 1]);
  return bits.flatMap((bit) => new Array<number>(divider).fill(bit));
}

/** Lets the receiver hear a line; returns its bytes, or 'error' for a bad frame. */
function hear(circuit: Evaluator, line: readonly number[]): (number | 'error')[] {
  return line.flatMap((rx): (number | 'error')[] => {
    circuit.set('rx', rx);
    circuit.clock();
    if (circuit.get('rx_error')) return ['error'];
    return circuit.get('rx_valid') ? [Number(circuit.get('rx_data'))] : [];
  });
}

const bytes = [0x00, 0xff, 0x55, 0xa3, 0x01, 0x80];

describe.each([4, 5, 16, 100])('a UART of %i cycles a bit', (divider) => {
  const quiet = new Array<number>(3 * divider).fill(1);

  test('sends bytes one behind another, as frames', () => {
    const circuit = reset(divider);
    expect([circuit.get('tx'), circuit.get('tx_ready')]).toEqual([1n, 1n]);
    const line: number[] = [];
    for (const byte of bytes) {
      circuit.set('tx_data', byte);
      circuit.set('tx_valid', 1);
      expect(circuit.get('tx_ready')).toBe(1n);
      circuit.clock();
      circuit.set('tx_data', ~byte & 0xff);
      for (let cycle = 0; cycle < 10 * divider; cycle++) {
        line.push(Number(circuit.get('tx')));
        if (cycle < 10 * divider - 1) expect(circuit.get('tx_ready')).toBe(0n);
        if (cycle < 10 * divider - 1) circuit.clock();
      }
      circuit.set('tx_valid', 0);
      circuit.clock();
    }
    expect(line).toEqual(frames(bytes, divider));
  });

  test('receives bytes one behind another', () => {
    const line = [...frames(bytes, divider), ...quiet];
    expect(hear(reset(divider), line)).toEqual(bytes);
  });

  test('reports a frame whose stop bit is missing, and hears the next', () => {
    const broken = [...frames([0x3c], divider).slice(0, 9 * divider), ...Array(divider).fill(0)];
    const circuit = reset(divider);
    expect(hear(circuit, [...broken, ...quiet, ...quiet, ...quiet, ...quiet])[0]).toBe('error');
    hear(circuit, new Array(12 * divider).fill(1));
    expect(hear(circuit, [...frames([0xc3], divider), ...quiet])).toEqual([0xc3]);
  });

  test('takes no start bit from a dip of less than half a bit', () => {
    const dip = new Array<number>(Math.ceil(divider / 2) - 1).fill(0);
    const line = [...quiet, ...dip, ...quiet, ...frames([0x96], divider), ...quiet];
    expect(hear(reset(divider), line)).toEqual([0x96]);
  });
});

test('a UART of 100 cycles a bit hears a sender that is 4 % too fast or too slow', () => {
  for (const other of [96, 104]) {
    const line = [...frames(bytes, other), ...new Array<number>(300).fill(1)];
    expect(hear(reset(100), line)).toEqual(bytes);
  }
});
