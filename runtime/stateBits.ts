import { checkState } from './engineArguments.js';
import type { ModelLayout } from './layout.js';

/** A state bit that a model does not keep, because it follows from another. */
export interface DerivedState {
  readonly role: string;
  readonly index: number;
  /** The bit that it is equal to; where there is none it is 0 for ever. */
  readonly of?: { readonly role: string; readonly index: number };
  /** It is the opposite of that. */
  readonly inverted: boolean;
}

/** How the state bits of a compiled model stand for the circuit's state elements. */
export interface StateMap {
  /** See `LogicState` of the compiler: what each state bit holds. */
  readonly states: readonly { readonly role: string; readonly index: number }[];
  /** 1 for a state bit that is kept inverted. */
  readonly stateInverted: Uint8Array;
  /** State bits beside these that are not kept; the model runs no state in which they differ. */
  readonly derived?: readonly DerivedState[];
}

/**
 * The state bits of a model for values of its state elements (0, 1, or 2 for x).
 *
 * Bits that remember the cycle before are taken from `before`, the packed row of its inputs; without
 * it they are cleared: what follows is a first cycle. Throws RangeError for a wrong length, for a
 * value that the model cannot hold, and for a state that does not follow from the one the model was
 * made for.
 */
export function loadStates(
  layout: ModelLayout,
  map: StateMap,
  state: Uint8Array,
  before?: Uint32Array,
): Uint8Array {
  checkState(layout, state);
  const { words } = layout.inputs;
  const inputBit = (bit: number): boolean =>
    before !== undefined && ((before[bit >>> 5]! >>> (bit & 31)) & 1) === 1;
  const mayBe = {
    value: (index: number) => state[index] !== 0,
    zero: (index: number) => state[index] !== 1,
    input: (index: number) =>
      inputBit(index) || (layout.threeValued && inputBit(words * 32 + index)),
    inputZero: (index: number) => before !== undefined && !inputBit(index),
    started: () => before !== undefined,
  };
  const held = ({ role, index }: { role: string; index: number }): boolean =>
    mayBe[role as keyof typeof mayBe]?.(index) ?? false;
  for (const bit of map.derived ?? []) {
    if (held(bit) === ((bit.of !== undefined && held(bit.of)) !== bit.inverted)) continue;
    const name = layout.stateNames[bit.index];
    throw new RangeError(`the model was made for another start: it cannot hold this ${name}`);
  }
  return Uint8Array.from(map.states, (bit, place) => Number(held(bit)) ^ map.stateInverted[place]!);
}

/** The state elements that state bits stand for; bit 0 of each entry of `bits` counts. */
export function showStates(
  layout: ModelLayout,
  map: StateMap,
  bits: ArrayLike<number>,
): Uint8Array {
  const state = new Uint8Array(layout.stateNames.length);
  const mayBeZero = new Uint8Array(layout.stateNames.length);
  const show = (role: string, index: number, held: number): void => {
    if (role === 'value') state[index] = held;
    else if (role === 'zero') mayBeZero[index] = held;
  };
  const kept = new Map<string, number>();
  map.states.forEach(({ role, index }, bit) => {
    const held = (bits[bit]! & 1) ^ map.stateInverted[bit]!;
    show(role, index, held);
    if (map.derived !== undefined) kept.set(`${role} ${index}`, held);
  });
  for (const { role, index, of, inverted } of map.derived ?? []) {
    const source = of === undefined ? 0 : kept.get(`${of.role} ${of.index}`)!;
    show(role, index, source ^ Number(inverted));
  }
  if (layout.threeValued) {
    for (let i = 0; i < state.length; i++) if (state[i] === 1 && mayBeZero[i] === 1) state[i] = 2;
  }
  return state;
}
