import type { NetValue } from './algebra.js';
import { driverValue } from './driver.js';
import { heldLatches, heldRegister } from './heldValues.js';
import { Settled } from './settled.js';

/**
 * What set and reset make of the registers on which they act in waves, by register; those that they
 * leave as they are, are left out, and so are cells that go by a table unless these are wanted too.
 */
export function actingControls(to: Settled, areTablesWanted = false): Map<number, NetValue> {
  const { pulses, circuit, algebra, tables } = to.moment;
  const acting = new Map<number, NetValue>();
  for (const register of pulses.delayed) {
    const output = circuit.registers.output[register]!;
    if (!areTablesWanted && tables.of(output) >= 0) continue;
    const held = to.value(output);
    const next = shownIn(to, output, held);
    if (!algebra.areSame(next, held)) acting.set(register, next);
  }
  return acting;
}

/**
 * Where waves have no end in three-valued logic: a moment in which what set and reset may yet change
 * is x. They only ever take knowledge away, so that this comes to an end.
 */
export function restingIn(last: Settled): Settled {
  const { algebra, pulses } = last.moment;
  let settled = last;
  for (let wave = 0; wave <= pulses.delayed.length; wave++) {
    const acting = actingControls(settled, true);
    if (acting.size === 0) break;
    const registers = settled.moment.registers.map((_, r) => {
      const held = heldRegister(settled, r);
      return algebra.merge(held, acting.get(r) ?? held);
    });
    const latches = heldLatches(settled);
    settled = new Settled({ ...settled.moment, registers, latches, before: settled });
  }
  return settled;
}

/** What the driver of a net makes of a held value in a moment: set and reset act on it. */
export const shownIn = (moment: Settled, output: number, held: NetValue): NetValue =>
  driverValue(moment.moment, output, (net) => moment.value(net), held);
