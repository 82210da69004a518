import { RunFault } from '../engine.js';
import type { Core } from './core.js';
import type { Ports } from './ports.js';
import { checkFields, type Value, writeValue } from './values.js';

/** Values of outputs that must all be there. */
export type OutputValues = Readonly<Record<string, Value>>;

/** How a run to a condition ended. */
export interface Reached {
  /** Whether the condition holds now. */
  readonly met: boolean;
  /** Cycles that have passed. */
  readonly cycles: number;
}

const FIRST_BLOCK = 16;
const LARGEST_BLOCK = 2048;

/**
 * Looks for the first moment at which outputs have certain values, block by block: a block that
 * holds it is undone and run again up to it.
 */
export class Search {
  done = 0;
  met = false;
  readonly #core: Core;
  readonly #limit: number;
  readonly #wanted: Uint32Array;
  readonly #mask: Uint32Array;
  #block = FIRST_BLOCK;

  constructor(core: Core, ports: Ports, values: OutputValues, limit: number) {
    this.#core = core;
    this.#limit = limit;
    this.#wanted = new Uint32Array(core.outputStride);
    this.#mask = new Uint32Array(core.outputStride);
    const { outputs, threeValued } = core.layout;
    for (const [name, value] of Object.entries(
      checkFields(values, 'values of outputs or a function'),
    )) {
      const port = ports.output(name);
      writeValue(core.row(this.#wanted, outputs), port, value);
      for (let bit = port.offset; bit < port.offset + port.width; bit++) {
        this.#mask[bit >>> 5]! |= 1 << (bit & 31);
        if (threeValued) this.#mask[outputs.words + (bit >>> 5)]! |= 1 << (bit & 31);
      }
    }
    this.met = this.#holds(core.outputs(), 0);
  }

  get isDone(): boolean {
    return this.met || this.done === this.#limit;
  }

  /** Runs some cycles. Throws `RunFault`. */
  advance(): void {
    const core = this.#core;
    const cycles = Math.min(this.#block, this.#limit - this.done);
    this.#block = Math.min(LARGEST_BLOCK, this.#block * 2);
    const start = core.standing();
    const rows = new Uint32Array(cycles * core.outputStride);
    const fault = completing(() => core.run(cycles, start.inputs, 0, rows));
    const ran = fault?.completed ?? cycles;
    const found = this.#firstOf(rows, ran);
    if (found === undefined) {
      this.done += ran;
      if (fault) throw fault;
      if (this.done === this.#limit) this.met = this.#holds(core.outputs(), 0);
      return;
    }
    core.moveTo(start);
    core.step(found);
    this.done += found;
    this.met = true;
  }

  #firstOf(rows: Uint32Array, cycles: number): number | undefined {
    for (let i = 0; i < cycles; i++) {
      if (this.#holds(rows, i * this.#core.outputStride)) return i;
    }
    return undefined;
  }

  #holds(rows: Uint32Array, at: number): boolean {
    return this.#mask.every((mask, i) => ((rows[at + i]! ^ this.#wanted[i]!) & mask) === 0);
  }
}

function completing(run: () => void): RunFault | undefined {
  try {
    run();
    return undefined;
  } catch (error) {
    if (error instanceof RunFault) return error;
    throw error;
  }
}
