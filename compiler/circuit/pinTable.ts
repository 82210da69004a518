import type { Latches, Registers } from './circuit.js';
import { Priority } from './circuit.js';
import { GrowableUint8, GrowableUint32 } from './growable.js';
import { type NetId, NO_NET } from './ids.js';
import { X } from './values.js';

/** What `CircuitBuilder.register` takes; see `Registers` for the meaning of the fields. */
export interface RegisterPins {
  readonly output: NetId;
  readonly clock: NetId;
  readonly data: NetId;
  readonly edge?: number;
  readonly set?: NetId;
  readonly reset?: NetId;
  readonly priority?: number;
  readonly initial?: number;
}

/** What `CircuitBuilder.latch` takes; see `Latches` for the meaning of the fields. */
export interface LatchPins {
  readonly output: NetId;
  readonly enable?: NetId;
  readonly data?: NetId;
  readonly set?: NetId;
  readonly reset?: NetId;
  readonly priority?: number;
  readonly initial?: number;
}

type SharedPins = Pick<LatchPins, 'data' | 'set' | 'reset' | 'priority' | 'initial'>;

/** The columns that registers and latches share. */
export class PinTable {
  readonly #output = new GrowableUint32();
  readonly #control = new GrowableUint32();
  readonly #edge = new GrowableUint8();
  readonly #data = new GrowableUint32();
  readonly #set = new GrowableUint32();
  readonly #reset = new GrowableUint32();
  readonly #priority = new GrowableUint8();
  readonly #initial = new GrowableUint8();

  add(pins: SharedPins, output: NetId, control: NetId, edge: number): void {
    this.#output.push(output);
    this.#control.push(control);
    this.#edge.push(edge);
    this.#data.push(pins.data ?? NO_NET);
    this.#set.push(pins.set ?? NO_NET);
    this.#reset.push(pins.reset ?? NO_NET);
    this.#priority.push(pins.priority ?? Priority.ResetWins);
    this.#initial.push(pins.initial ?? X);
  }

  /** Lets the elements that drive certain nets drive others. */
  moveOutputs(moved: ReadonlyMap<number, NetId>): void {
    for (let i = 0; i < this.#output.length; i++) {
      const to = moved.get(this.#output.get(i));
      if (to !== undefined) this.#output.set(i, to);
    }
  }

  /** Sets the power-up values of the elements that drive certain nets. */
  setInitials(values: ReadonlyMap<number, 0 | 1>): void {
    for (let i = 0; i < this.#output.length; i++) {
      const value = values.get(this.#output.get(i));
      if (value !== undefined) this.#initial.set(i, value);
    }
  }

  /** Sets the marks of all nets at input pins. */
  markReads(isRead: Uint8Array): void {
    for (const pins of [this.#control, this.#data, this.#set, this.#reset]) {
      for (let i = 0; i < pins.length; i++) if (pins.get(i) !== NO_NET) isRead[pins.get(i)] = 1;
    }
  }

  registers(): Registers {
    return { ...this.#common(), clock: this.#control.take(), edge: this.#edge.take() };
  }

  latches(): Latches {
    return { ...this.#common(), enable: this.#control.take() };
  }

  #common() {
    return {
      count: this.#output.length,
      output: this.#output.take(),
      data: this.#data.take(),
      set: this.#set.take(),
      reset: this.#reset.take(),
      priority: this.#priority.take(),
      initial: this.#initial.take(),
    };
  }
}
