import type { LogicState } from '../../logic/logic.js';

/** The state bits at the start, for values of the state elements (0, 1, or 2 for x). */
export function startBits(states: readonly LogicState[], start: Uint8Array): Uint8Array {
  return Uint8Array.from(states, ({ role, index }) => {
    if (role === 'value') return Number(start[index] !== 0);
    return role === 'zero' ? Number(start[index] !== 1) : 0;
  });
}
