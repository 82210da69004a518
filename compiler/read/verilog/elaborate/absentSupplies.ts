import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Span } from '../../../diagnostics/source.js';
import { listed } from '../../listed.js';

/** How many names a message lists. */
const MAX_LISTED = 8;

/** Collects connections to power pins that the model of a cell does not have, for one note. */
export class AbsentSupplies {
  readonly #pins = new Set<string>();
  readonly #cells = new Set<string>();
  #first: Span | undefined;
  #count = 0;

  /** `place` tells where the connection is; it is asked for the first one only. */
  add(cell: string, pin: string, place: () => Span): void {
    this.#pins.add(pin);
    this.#cells.add(cell);
    this.#first ??= place();
    this.#count++;
  }

  report(diagnostics: Diagnostics): void {
    if (this.#count === 0) return;
    const pins = listed([...this.#pins], MAX_LISTED);
    const cells = listed([...this.#cells], MAX_LISTED);
    const message =
      `the models of ${cells} have no power pins ${pins}: connections to these are passed over ` +
      `(${this.#count} in all); where the library has the pins under an \`ifdef\`, --define its name`;
    diagnostics.add('supply-absent', message, this.#first);
  }
}
