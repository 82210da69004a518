import type { Position } from '../../../diagnostics/sourceMap.js';

/** Thrown where a module must be compiled anew with an array built from registers. */
export class NeedsRegisters extends Error {
  /** Where the array is declared. */
  readonly position: Position;

  constructor(position: Position) {
    super('an array needs registers');
    this.name = 'NeedsRegisters';
    this.position = position;
  }
}
