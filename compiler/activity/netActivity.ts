import type { Design } from '../compile.js';
import { ClockLevels } from '../waveform/clockLevels.js';
import type { SignalList } from '../waveform/signalList.js';
import type { WaveRequest } from '../waveform/wave.js';
import type { ActivityCounter } from './activityCounter.js';
import { type ClockCount, clockCounts } from './clockCounts.js';
import type { ObservedNets } from './observedNets.js';

/** What one net does; times add up to the duration. */
export interface NetCounts {
  /** Changes between 0 and 1. */
  readonly toggles: number;
  readonly timeAt0: number;
  readonly timeAt1: number;
  readonly timeAtX: number;
}

/** What the nets of a list did in some cycles, in the units of time of `ClockLevels`. */
export class NetActivity {
  readonly design: Design;
  readonly list: SignalList;
  readonly cycles: number;
  readonly duration: number;
  readonly #observed: ObservedNets;
  readonly #counter: ActivityCounter;
  readonly #clocks: readonly ClockCount[];
  readonly #unitsOfCycle: number;

  /** Of the cycles that a counter has counted, the first of which is cycle `first`. */
  constructor(
    { design, list }: Omit<WaveRequest, 'window'>,
    observed: ObservedNets,
    counter: ActivityCounter,
    first: number,
  ) {
    const levels = new ClockLevels(design.clocks, design.schedule);
    this.design = design;
    this.list = list;
    this.cycles = counter.cycles;
    this.#observed = observed;
    this.#counter = counter;
    this.#clocks = clockCounts(design, first, this.cycles);
    this.#unitsOfCycle = levels.sampleTime(1) - levels.sampleTime(0);
    this.duration = this.cycles * this.#unitsOfCycle;
  }

  /** Whether the net at a place of the list is a clock or a copy of one. */
  isClock(place: number): boolean {
    return this.#observed.clockOf[place]! >= 0;
  }

  /** Changes of the net at a place of the list. */
  toggles(place: number): number {
    const clock = this.#observed.clockOf[place]!;
    if (clock >= 0) return this.#clocks[clock >>> 1]!.changes;
    return this.#counter.changes(this.#observed.literalOf[place]! >>> 1);
  }

  /** All about the net at a place of the list. */
  counts(place: number): NetCounts {
    const clock = this.#observed.clockOf[place]!;
    const value = this.#observed.literalOf[place]!;
    const ones =
      clock >= 0
        ? this.#clocks[clock >>> 1]!.high
        : this.#unitsOfCycle * this.#counter.ones(value >>> 1);
    const timeAtX = clock >= 0 ? 0 : this.#unitsOfCycle * this.#counter.unknown(value >>> 1);
    const zeros = this.duration - timeAtX - ones;
    const isInverted = ((clock >= 0 ? clock : value) & 1) === 1;
    return {
      toggles: this.toggles(place),
      timeAt0: isInverted ? ones : zeros,
      timeAt1: isInverted ? zeros : ones,
      timeAtX,
    };
  }
}
