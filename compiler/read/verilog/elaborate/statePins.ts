import type { NetId } from '../../../circuit/ids.js';

/** The nets of a sequential primitive, and its value at power-up: 0, 1, or 2 for none. */
export interface StatePins {
  readonly output: NetId;
  readonly inputs: readonly NetId[];
  /** Names of the inputs, for messages. */
  readonly names: readonly string[];
  readonly initial: number;
}
