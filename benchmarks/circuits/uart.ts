import { decrement, equals, increment, mux, muxConstant, tree } from './logic.js';
import { Module } from './netlistWriter.js';
import { type Bit, type Bus, one, zero } from './nets.js';

// A start bit, eight data bits, a stop bit.
const frameBits = 10n;

/**
 * An asynchronous serial transmitter and receiver, eight data bits, no parity, one stop bit, least
 * significant bit first, as `uart` with inputs `clk`, `reset` (asynchronous), `tx_data[7:0]`,
 * `tx_valid`, `rx` and outputs `tx`, `tx_ready`, `rx_data[7:0]`, `rx_valid`, `rx_error`. A byte
 * is taken where `tx_valid` and `tx_ready` are both 1. `rx_valid` is 1 for one cycle with each
 * byte received, `rx_error` in its place where the stop bit is 0; `rx_data` holds until the next
 * start bit. A bit lasts `divider` cycles, at least 4.
 */
export function uart(divider: number): Module {
  const m = new Module('uart');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const data = m.inputs('tx_data', 8);
  const valid = m.input('tx_valid');
  const rx = m.input('rx');
  const sent = m.instance<'tx' | 'ready'>(transmitter(divider), 'transmitter', {
    clk,
    reset,
    data,
    valid,
  });
  const received = m.instance<'data' | 'valid' | 'error'>(receiver(divider), 'receiver', {
    clk,
    reset,
    rx,
  });
  m.output('tx', sent.tx);
  m.output('tx_ready', sent.ready);
  m.output('rx_data', received.data);
  m.output('rx_valid', received.valid);
  m.output('rx_error', received.error);
  return m;
}

function transmitter(divider: number): Module {
  const m = new Module('uart_transmitter');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const data = m.inputs('data', 8);
  const valid = m.input('valid');
  const frame = m.wires('frame', 9);
  const bitsLeft = m.wires('bits_left', 4);
  const busy = m.named('busy', tree(m, 'or', bitsLeft));
  const ready = m.not(busy);
  const load = m.named('load', m.and(valid, ready));
  const tick = bitTimer(m, clk, reset, divider, load, 0);
  const step = m.named('step', m.or(load, m.and(tick, busy)));

  const shifted = [...frame.slice(1), one];
  const nextFrame = mux(m, load, shifted, [zero, ...data]);
  m.flipFlops(frame, nextFrame, { clock: clk, enable: step, reset, value: 0x1ffn });
  const nextLeft = muxConstant(m, load, decrement(m, bitsLeft), frameBits);
  m.flipFlops(bitsLeft, nextLeft, { clock: clk, enable: step, reset });
  m.output('tx', frame[0]!);
  m.output('ready', ready);
  return m;
}

function receiver(divider: number): Module {
  const m = new Module('uart_receiver');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const rx = m.input('rx');
  const synchronizer = m.wires('synchronizer', 2);
  m.flipFlops(synchronizer, [rx, synchronizer[0]!], { clock: clk, reset, value: 0b11n });
  const line = synchronizer[1]!;

  const frame = m.wires('frame', 8);
  const bitsLeft = m.wires('bits_left', 4);
  const busy = m.named('busy', tree(m, 'or', bitsLeft));
  const begin = m.named('begin_frame', m.nor(busy, line));
  // The first tick comes after half a bit, so that each bit is taken in its middle.
  const tick = bitTimer(m, clk, reset, divider, begin, Math.ceil(divider / 2));
  const sample = m.named('sample', m.and(tick, busy));
  const inStart = equals(m, bitsLeft, Number(frameBits));
  const inStop = equals(m, bitsLeft, 1);
  const falseStart = m.named('false_start', m.and(inStart, line));

  const takeBit = m.named('take_bit', m.and(sample, m.not(inStop)));
  m.flipFlops(frame, [...frame.slice(1), line], { clock: clk, enable: takeBit, reset });
  const counted = muxConstant(m, falseStart, decrement(m, bitsLeft), 0n);
  const nextLeft = muxConstant(m, begin, counted, frameBits);
  const step = m.named('step', m.or(begin, sample));
  m.flipFlops(bitsLeft, nextLeft, { clock: clk, enable: step, reset });

  const flags = m.wires('flags', 2);
  const end = m.named('end_frame', m.and(sample, inStop));
  m.flipFlops(flags, [m.and(end, line), m.and(end, m.not(line))], { clock: clk, reset });
  m.output('data', frame);
  m.output('valid', flags[0]!);
  m.output('error', flags[1]!);
  return m;
}

// Ticks every `divider` cycles; `restart` sets it to `from`.
function bitTimer(
  m: Module,
  clock: Bit,
  reset: Bit,
  divider: number,
  restart: Bit,
  from: number,
): Bit {
  const timer: Bus = m.wires('timer', Math.ceil(Math.log2(divider)));
  const tick = m.named('tick', equals(m, timer, divider - 1));
  const wrapped = muxConstant(m, tick, increment(m, timer), 0n);
  const next = muxConstant(m, restart, wrapped, BigInt(from));
  m.flipFlops(timer, next, { clock, reset });
  return tick;
}
