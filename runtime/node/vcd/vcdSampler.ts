import type { ModelLayout } from '../../layout.js';
import { anyBit } from '../../rowBits.js';
import type { RowGatherer } from '../../rowGatherer.js';
import type { VcdState } from './vcdState.js';

/** What makes a cycle: an edge of the clock to this level, a step of time, or a period in units. */
export type VcdCycle =
  | { readonly by: 'clock'; readonly active: 0 | 1 }
  | { readonly by: 'step' }
  | { readonly by: 'period'; readonly units: number };

/** Ports named when something is said about x. */
const MOST_NAMED = 5;

/** Turns the values at steps of time into rows, one a cycle. */
export class VcdSampler {
  readonly #layout: ModelLayout;
  readonly #state: VcdState;
  readonly #cycle: VcdCycle;
  readonly #gatherer: RowGatherer;
  /** The values before the present step of time. */
  readonly #values: Uint32Array;
  readonly #unknown: Uint32Array;
  #clock: 0 | 1 | undefined;
  #time: number | undefined;
  #hasChanged = false;
  #nextCycle = 0;
  #unknownCycles = 0;
  #firstUnknown: string | undefined;

  constructor(layout: ModelLayout, state: VcdState, cycle: VcdCycle, gatherer: RowGatherer) {
    this.#layout = layout;
    this.#state = state;
    this.#cycle = cycle;
    this.#gatherer = gatherer;
    this.#values = state.values.slice();
    this.#unknown = state.unknown.slice();
  }

  /** The present time in units; undefined before the first. */
  get time(): number | undefined {
    return this.#time;
  }

  /** Says that something has changed in the present step, which need not be a port. */
  change(): void {
    this.#hasChanged = true;
  }

  /** Goes to a later time. Where it returns true, what was gathered must be taken. */
  goTo(time: number): boolean {
    // Changes of one time may be written in several places.
    if (time === this.#time) return false;
    // What stands before the first time belongs to it.
    const isStart = this.#time === undefined && this.#cycle.by === 'step';
    const isFull = !isStart && this.#endStep(time);
    this.#time = time;
    return isFull;
  }

  /** Ends the last step. */
  end(): boolean {
    if (this.#cycle.by !== 'period') return this.#endStep(0);
    const isOpen = this.#hasChanged || (this.#time ?? 0) % this.#cycle.units !== 0;
    return isOpen && this.#add(this.#state.values, this.#state.unknown, 1);
  }

  /** Says that the recording pauses: the next known level of the clock is no edge. */
  pause(): void {
    this.#state.clock = undefined;
    this.#clock = undefined;
  }

  /** What is to be said about x in a two-valued run. */
  notes(): string[] {
    if (this.#unknownCycles === 0) return [];
    const cycles = this.#unknownCycles === 1 ? '1 cycle' : `${this.#unknownCycles} cycles`;
    return [
      `inputs are x or z in ${cycles} of the recording, first ${this.#firstUnknown}; they are ` +
        'taken as 0. With --power-up unknown they stay x',
    ];
  }

  #endStep(time: number): boolean {
    const { by } = this.#cycle;
    const { values, unknown, clock } = this.#state;
    let isFull = false;
    if (by === 'clock') {
      const isEdge = clock === this.#cycle.active && this.#clock === 1 - clock;
      // Registers capture what was there before the edge, not what changes with it.
      if (isEdge) isFull = this.#add(this.#values, this.#unknown, 1);
      this.#clock = clock;
      this.#values.set(values);
      this.#unknown.set(unknown);
    } else if (by === 'step') {
      if (this.#hasChanged) isFull = this.#add(values, unknown, 1);
    } else {
      const cycles = Math.floor(time / this.#cycle.units) - this.#nextCycle;
      if (cycles > 0) isFull = this.#add(values, unknown, cycles);
    }
    this.#hasChanged = false;
    return isFull;
  }

  #add(values: Uint32Array, unknown: Uint32Array, cycles: number): boolean {
    const { row } = this.#gatherer;
    const { words } = this.#layout.inputs;
    row.set(values);
    if (this.#layout.threeValued) row.set(unknown, words);
    else this.#look(unknown, cycles);
    this.#nextCycle += cycles;
    return this.#gatherer.add(cycles);
  }

  #look(unknown: Uint32Array, cycles: number): void {
    let isUnknown = 0;
    for (let word = 0; word < unknown.length; word++) isUnknown |= unknown[word]!;
    if (isUnknown === 0) return;
    this.#unknownCycles += cycles;
    this.#firstUnknown ??= `${this.#unknownNames(unknown)} at cycle ${this.#nextCycle}`;
  }

  #unknownNames(unknown: Uint32Array): string {
    const ports = this.#layout.inputs.ports.filter(({ offset, width }) =>
      anyBit(unknown, 0, offset, width),
    );
    const names = ports.slice(0, MOST_NAMED).map(({ name }) => name);
    const rest = ports.length - MOST_NAMED;
    return `${names.join(', ')}${rest > 0 ? ` and ${rest} more` : ''}`;
  }
}
