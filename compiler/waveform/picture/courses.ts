import { formatValue } from '../../../runtime/valueText.js';
import type { SignalList } from '../signalList.js';
import type { WaveRows } from '../wave.js';

/** A value of a signal and the cycles for which it stays, last one exclusive. */
export interface Stretch {
  readonly from: number;
  to: number;
  /** As a response table has it: `0`, `1`, `x`, `0x1f`, `0b1x`. */
  readonly text: string;
}

/** Collects, for each signal of a list, the values that it takes one after another. */
export class Courses {
  readonly #list: SignalList;
  readonly stretches: readonly Stretch[][];

  constructor(list: SignalList) {
    this.#list = list;
    this.stretches = Array.from({ length: list.count }, () => []);
  }

  /** Adds the next rows. */
  add({ firstCycle, cycles, rows, place }: WaveRows): void {
    for (let row = 0; row < cycles; row++) {
      const at = row * place.stride + place.firstWord;
      const unknownAt = place.toUnknown === undefined ? undefined : at + place.toUnknown;
      for (const [entry, stretches] of this.stretches.entries()) {
        const range = { offset: this.#list.place[entry]!, width: this.#list.width[entry]! };
        const text = formatValue(range, rows, at, unknownAt);
        const last = stretches.at(-1);
        if (last?.text === text) last.to = firstCycle + row + 1;
        else stretches.push({ from: firstCycle + row, to: firstCycle + row + 1, text });
      }
    }
  }
}
