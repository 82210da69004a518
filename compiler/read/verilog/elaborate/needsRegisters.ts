import type { Position } from '../../../diagnostics/sourceMap.js';

/** Thrown where a module must be compiled anew with an array built from registers. */
export class NeedsRegisters extends Error {
  /** Where the array is declared. */
  readonly position: Position;
  /** Set where another module's use of the array is the reason. */
  readonly isFar: boolean;

  constructor({ position, isFar }: { readonly position: Position; readonly isFar?: true }) {
    super('an array needs registers');
    this.name = 'NeedsRegisters';
    this.position = position;
    this.isFar = isFar === true;
  }
}
