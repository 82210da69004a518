import { increment, mux, tree } from './logic.js';
import { Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';

const sliceWidth = 16;
const slices = 4;

/**
 * A loadable up counter of 64 bits in four slices, as `counter` with inputs `clk`, `reset`
 * (asynchronous), `enable`, `load`, `data[63:0]` and outputs `count[63:0]`, `terminal`. `load`
 * goes before `enable`; `terminal` is 1 where an enabled counter is about to wrap to 0.
 */
export function counter(): Module {
  const slice = counterSlice();
  const m = new Module('counter');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const enable = m.input('enable');
  const load = m.input('load');
  const data = m.inputs('data', sliceWidth * slices);
  const count: Bit[] = [];
  let carry = enable;
  for (let i = 0; i < slices; i++) {
    const part: Bus = data.slice(i * sliceWidth, (i + 1) * sliceWidth);
    const pins = { clk, reset, load, carry_in: carry, data: part };
    const outputs = m.instance<'count' | 'carry_out'>(slice, `slice_${i}`, pins);
    count.push(...outputs.count);
    carry = outputs.carry_out[0]!;
  }
  m.output('count', count);
  m.output('terminal', carry);
  return m;
}

function counterSlice(): Module {
  const m = new Module('counter_slice');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const load = m.input('load');
  const carryIn = m.input('carry_in');
  const data = m.inputs('data', sliceWidth);
  const count = m.wires('value', sliceWidth);
  const next = mux(m, load, increment(m, count, carryIn), data);
  m.flipFlops(count, next, { clock: clk, reset });
  m.output('count', count);
  m.output('carry_out', m.and(carryIn, tree(m, 'and', count)));
  return m;
}
