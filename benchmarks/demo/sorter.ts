import { add, equals, increment, muxConstant, zipWith } from '../circuits/logic.js';
import { Module } from '../circuits/netlistWriter.js';
import { type Bit, type Bus, constantBus, one } from '../circuits/nets.js';
import { verilog } from '../circuits/verilog.js';

export { sorterExpectation } from './specification.js';

import { sorter } from './specification.js';

const heading = `// Sequencer of a parcel sorter, gate level. A clock cycle is a tick of 10 ms.
// It runs from power-up and needs no input but its clock.

`;

/**
 * The netlist of a parcel sorter's sequencer, module `parcel_sorter`, which needs no input but
 * `clk` and meets the specification for 1,041,002 cycles. Its service timer asks whether the
 * 20-bit tick has reached the 20-bit due time by comparing them as plain numbers. The fifth due
 * time does not fit into 20 bits; its remainder looks long past, and the belt, just released from
 * the fourth service, stops at once again, and again. `repaired` asks for the sign of the
 * difference instead: one xnor gate in place of the last carry.
 */
export function sorterNetlist(repaired = false): string {
  return [heading, ...verilog(parcelSorter(repaired))].join('');
}

function parcelSorter(repaired: boolean): Module {
  const m = new Module('parcel_sorter');
  const clk = m.input('clk');
  const { tick } = m.instance<'tick'>(tickCounter(), 'ticks', { clk });
  const timer = m.instance<'in_service' | 'due'>(serviceTimer(repaired), 'service', { clk, tick });
  const beltReady = m.not(timer.in_service[0]!);
  const slot = m.instance<'window' | 'slot_end'>(slotCounter(), 'slot', { clk, run: beltReady });
  const shift = slot.slot_end;
  const { lane } = m.instance<'lane'>(laneSource(), 'lanes', { clk, shift });
  const { stations } = m.instance<'stations'>(tracker(), 'belt', { clk, shift, lane });
  const divert = sorter.stations.map((_, i) => {
    const pins = { run: beltReady, window: slot.window, lane: stations.slice(2 * i, 2 * i + 2) };
    return m.instance<'open'>(diverter(i + 1), `diverter_${i + 1}`, pins).open[0]!;
  });
  m.output('belt_ready', beltReady);
  m.output('divert', divert);
  m.output('tick_now', tick);
  m.output('service_due', timer.due);
  return m;
}

// Counts every cycle, for ever, in nibbles with a carry between them.
function tickCounter(): Module {
  const nibble = new Module('tick_nibble');
  const nibbleClk = nibble.input('clk');
  const carryIn = nibble.input('carry_in');
  const count = nibble.wires('count', 4);
  nibble.flipFlops(count, increment(nibble, count, carryIn), { clock: nibbleClk, value: 0n });
  const carry = nibble.and(carryIn, ...count);
  nibble.output('count', count);
  nibble.output('carry_out', carry);

  const m = new Module('tick_counter');
  const clk = m.input('clk');
  const tick: Bit[] = [];
  let carryBetween = one;
  for (let i = 0; i < sorter.tickBits / 4; i++) {
    const pins = { clk, carry_in: carryBetween };
    const outputs = m.instance<'count' | 'carry_out'>(nibble, `nibble_${i}`, pins);
    tick.push(...outputs.count);
    carryBetween = outputs.carry_out[0]!;
  }
  m.output('tick', tick);
  return m;
}

// Stops the belt for a service when one is due, and sets when the next will be.
function serviceTimer(repaired: boolean): Module {
  const m = new Module('service_timer');
  const clk = m.input('clk');
  const tick = m.inputs('tick', sorter.tickBits);
  const due = m.wires('due', sorter.tickBits);
  const inService = m.wires('in_service', 1);
  const elapsed = m.wires('elapsed', 10);

  const compare = comparator(repaired);
  const { reached } = m.instance<'reached'>(compare, 'compare', { now: tick, due });
  const begin = m.named('begin_service', m.and(reached[0]!, m.not(inService[0]!)));
  const interval = BigInt(sorter.serviceInterval);
  const { sum } = m.instance<'sum'>(adder(), 'add_interval', {
    left: due,
    right: constantBus(interval, sorter.tickBits),
  });
  m.flipFlops(due, sum, { clock: clk, enable: begin, value: interval });

  const over = m.named('service_over', equals(m, elapsed, sorter.serviceTicks - 1));
  const staying = m.named('staying', m.and(inService[0]!, m.not(over)));
  m.flipFlops(inService, [m.or(begin, staying)], { clock: clk, value: 0n });
  const counted = zipWith(m, 'and', increment(m, elapsed), staying);
  m.flipFlops(elapsed, counted, { clock: clk, value: 0n });
  m.output('in_service', inService);
  m.output('due', due);
  return m;
}

// Subtracts `due` from `now` and looks at the last carry, or, repaired, at the sign.
function comparator(repaired: boolean): Module {
  const m = new Module('due_comparator');
  const now = m.inputs('now', sorter.tickBits);
  const due = m.inputs('due', sorter.tickBits);
  const inverted = due.map((bit, i) => m.named(`due_not_${i}`, m.not(bit)));
  const last = sorter.tickBits - 1;
  let carry = m.named('carry_1', m.or(now[0]!, inverted[0]!));
  for (let i = 1; i < last; i++) {
    carry = m.named(`carry_${i + 1}`, carryOf(m, now[i]!, inverted[i]!, carry));
  }
  const reached = repaired
    ? m.xnor(now[last]!, inverted[last]!, carry)
    : carryOf(m, now[last]!, inverted[last]!, carry);
  m.output('reached', reached);
  return m;
}

function carryOf(m: Module, a: Bit, b: Bit, carry: Bit): Bit {
  return m.or(m.and(a, b), m.and(carry, m.or(a, b)));
}

function adder(): Module {
  const m = new Module('tick_adder');
  const left = m.inputs('left', sorter.tickBits);
  const right = m.inputs('right', sorter.tickBits);
  // The carry out of the last bit has nowhere to go: here the due time wraps.
  m.output('sum', add(m, sorter.tickBits, left, right));
  return m;
}

// Counts the ticks of a slot while the belt runs; `window` is when a diverter may be open.
function slotCounter(): Module {
  const m = new Module('slot_counter');
  const clk = m.input('clk');
  const run = m.input('run');
  const phase = m.wires('phase', 5);
  const window = m.wires('window', 1);
  const { slotTicks, openFrom, openUntil } = sorter;
  const atEnd = m.named('at_end', equals(m, phase, slotTicks - 1));
  const next = muxConstant(m, atEnd, increment(m, phase), 0n);
  m.flipFlops(phase, next, { clock: clk, enable: run, value: 0n });
  const opening = m.named('opening', equals(m, phase, openFrom - 1));
  const closing = m.named('closing', equals(m, phase, openUntil - 1));
  const staying = m.and(window[0]!, m.not(closing));
  m.flipFlops(window, [m.or(opening, staying)], { clock: clk, enable: run, value: 0n });
  m.output('window', window);
  m.output('slot_end', m.and(run, atEnd));
  return m;
}

// Stands for the scanner: a pseudo-random lane for each parcel, from x^7 + x^6 + 1.
function laneSource(): Module {
  const m = new Module('lane_source');
  const clk = m.input('clk');
  const shift = m.input('shift');
  const stage = m.wires('stage', 7);
  const feedback = m.named('feedback', m.xor(stage[6]!, stage[5]!));
  const next = [feedback, ...stage.slice(0, 6)];
  m.flipFlops(stage, next, { clock: clk, enable: shift, value: 0x7fn });
  m.output('lane', stage.slice(0, 2));
  return m;
}

// Carries the lane of each parcel along with it, slot by slot, to the diverters.
function tracker(): Module {
  const m = new Module('belt_tracker');
  const clk = m.input('clk');
  const shift = m.input('shift');
  let lane: Bus = m.inputs('lane', 2);
  const slots = Array.from({ length: Math.max(...sorter.stations) }, (_, i) => {
    const slot = m.wires(`slot_${i + 1}`, 2);
    m.flipFlops(slot, lane, { clock: clk, enable: shift, value: 0n });
    lane = slot;
    return slot;
  });
  m.output(
    'stations',
    sorter.stations.flatMap((station) => slots[station - 1]!),
  );
  return m;
}

function diverter(lane: number): Module {
  const m = new Module(`diverter_lane_${lane}`);
  const run = m.input('run');
  const window = m.input('window');
  const parcelLane = m.inputs('lane', 2);
  m.output('open', m.and(run, window, equals(m, parcelLane, lane)));
  return m;
}
