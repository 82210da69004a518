import { checkState } from './engineArguments.js';
import type { ModelLayout } from './layout.js';

/** How the state bits of a compiled model stand for the circuit's state elements. */
export interface StateMap {
  /** See `LogicState` of the compiler: what each state bit holds. */
  readonly states: readonly { readonly role: string; readonly index: number }[];
  /** 1 for a state bit that is kept inverted. */
  readonly stateInverted: Uint8Array;
}

/**
 * The state bits of a model for values of its state elements (0, 1, or 2 for x).
 *
 * Bits that remember the cycle before are cleared: what follows is a first cycle. Throws
 * RangeError for a wrong length, and for a value that the model cannot hold.
 */
export function loadStates(layout: ModelLayout, map: StateMap, state: Uint8Array): Uint8Array {
  checkState(layout, state);
  return Uint8Array.from(map.states, ({ role, index }, bit) => {
    const value = state[index]!;
    const held = role === 'value' ? value !== 0 : role === 'zero' ? value !== 1 : false;
    return Number(held) ^ map.stateInverted[bit]!;
  });
}

/** The state elements that state bits stand for; bit 0 of each entry of `bits` counts. */
export function showStates(
  layout: ModelLayout,
  map: StateMap,
  bits: ArrayLike<number>,
): Uint8Array {
  const state = new Uint8Array(layout.stateNames.length);
  const mayBeZero = new Uint8Array(layout.stateNames.length);
  map.states.forEach(({ role, index }, bit) => {
    const held = (bits[bit]! & 1) ^ map.stateInverted[bit]!;
    if (role === 'value') state[index] = held;
    else if (role === 'zero') mayBeZero[index] = held;
  });
  if (layout.threeValued) {
    for (let i = 0; i < state.length; i++) if (state[i] === 1 && mayBeZero[i] === 1) state[i] = 2;
  }
  return state;
}
