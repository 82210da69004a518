import type { RunPoint } from './engine.js';

/** Whether two points hold the same state and memories; what came before them does not count. */
export const isSameState = (a: RunPoint, b: RunPoint): boolean =>
  isSame(a.state, b.state) && isSame(a.memory, b.memory);

function isSame(a: Uint8Array, b: Uint8Array): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
