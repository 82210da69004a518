import { powerUpSeed, RandomBits } from '../../runtime/random.js';
import type { Circuit } from './circuit.js';
import { loopsOf } from './loops.js';
import { X } from './values.js';

/** How state elements start to which the netlist gives no value; the table lists all ways. */
export type PowerUp = 'zero' | 'one' | 'random' | 'unknown';

/** All power-up modes, the default first. */
export const powerUpModes: readonly PowerUp[] = ['zero', 'one', 'random', 'unknown'];

/**
 * The state at power-up, in the order of `ModelLayout.stateNames`: 0, 1, or 2 for x.
 *
 * A value that the netlist itself gives wins. Mode `random` gives element i bit i (bit i % 32 of
 * word i >> 5) of the stream of `powerUpSeed(seed)`, whether or not the netlist gives it a value,
 * so that an initial value added to one element moves no other. The default seed is 0.
 */
export function powerUpState(circuit: Circuit, mode: PowerUp, seed: number | bigint = 0) {
  const { registers, latches } = circuit;
  const state = new Uint8Array(registers.count + latches.count + loopsOf(circuit).keptNets.length);
  state.fill(X);
  state.set(registers.initial);
  state.set(latches.initial, registers.count);
  const fill = fillOf(mode, state.length, seed);
  for (let i = 0; i < state.length; i++) if (state[i] === X) state[i] = fill(i);
  return state;
}

function fillOf(mode: PowerUp, count: number, seed: number | bigint): (index: number) => number {
  switch (mode) {
    case 'zero':
      return () => 0;
    case 'one':
      return () => 1;
    case 'unknown':
      return () => X;
    case 'random': {
      const words = new Uint32Array((count + 31) >>> 5);
      new RandomBits(powerUpSeed(seed)).fill(words, 0, words.length);
      return (index) => (words[index >>> 5]! >>> (index & 31)) & 1;
    }
  }
}
