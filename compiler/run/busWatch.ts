import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import type { ResponseBlock } from '../../runtime/stream.js';
import type { BusCheck, Circuit, Port } from '../circuit/circuit.js';
import { modelLayout } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';

/** A bus whose drivers disagreed (`conflict`), or that none drove while it was read (`float`). */
export interface BusEvent {
  readonly bus: string;
  readonly kind: BusCheck['kind'];
  /** The first cycle at whose sampling it was so, and how many there were. */
  readonly firstCycle: number;
  readonly cycles: number;
  readonly file?: string;
  readonly line?: number;
  readonly column?: number;
}

/**
 * Watches the buses of a circuit while it runs: the conditions to watch for are outputs behind the
 * circuit's own, in words of their own, and are taken out of the response again.
 */
export class BusWatch {
  /** The design to run in place of the one given. */
  readonly design: Design;
  readonly #circuit: Circuit;
  readonly #own: ModelLayout;
  readonly #watched: ModelLayout;
  readonly #first: Float64Array;
  readonly #cycles: Float64Array;
  #rows = new Uint32Array(0);

  /** Undefined where there is no bus to watch. */
  static of(design: Design): BusWatch | undefined {
    return design.circuit.checks.length > 0 ? new BusWatch(design) : undefined;
  }

  private constructor(design: Design) {
    const { circuit, clocks, layout } = design;
    const watched = { ...circuit, outputs: [...circuit.outputs, watchPort(circuit, layout)] };
    this.#watched = modelLayout(watched, clocks, layout.threeValued);
    this.design = { ...design, circuit: watched, layout: this.#watched };
    this.#circuit = circuit;
    this.#own = layout;
    this.#first = new Float64Array(circuit.checks.length).fill(-1);
    this.#cycles = new Float64Array(circuit.checks.length);
  }

  /** The response of the circuit's own outputs; used again for the next block. */
  ownPart(block: ResponseBlock): ResponseBlock {
    const { threeValued } = this.#own;
    const groups = threeValued ? 2 : 1;
    const from = rowStride(this.#watched.outputs, threeValued);
    const to = rowStride(this.#own.outputs, threeValued);
    const { words, bits } = this.#own.outputs;
    // What pads the last word in the watched row is no part of the response.
    const lastWord = bits % 32 === 0 ? -1 : (1 << (bits % 32)) - 1;
    if (this.#rows.length < block.cycles * to) this.#rows = new Uint32Array(block.cycles * to);
    for (let row = 0; row < block.cycles; row++) {
      for (let group = 0; group < groups; group++) {
        const start = row * from + group * this.#watched.outputs.words;
        const end = row * to + (group + 1) * words;
        this.#rows.set(block.rows.subarray(start, start + words), end - words);
        if (words > 0) this.#rows[end - 1]! &= lastWord;
      }
    }
    return { ...block, rows: this.#rows.subarray(0, block.cycles * to) };
  }

  /** Notes what the first `cycles` rows of a block tell of the buses. A condition that is x is none. */
  look(block: ResponseBlock, cycles: number): void {
    const stride = rowStride(this.#watched.outputs, this.#own.threeValued);
    const { words } = this.#own.outputs;
    for (let row = 0; row < cycles; row++) {
      for (let check = 0; check < this.#first.length; check += 32) {
        let set = block.rows[row * stride + words + (check >>> 5)]!;
        for (; set !== 0; set &= set - 1) {
          const bit = check + 31 - Math.clz32(set & -set);
          if (this.#first[bit]! < 0) this.#first[bit] = block.firstCycle + row;
          this.#cycles[bit]!++;
        }
      }
    }
  }

  /** What was seen, the earliest first. */
  events(): BusEvent[] {
    const events = this.#circuit.checks.flatMap((check, i): BusEvent[] => {
      if (this.#first[i]! < 0) return [];
      const { name: bus, kind } = check;
      const seen = { bus, kind, firstCycle: this.#first[i]!, cycles: this.#cycles[i]! };
      return [{ ...seen, ...placeOf(this.#circuit, check) }];
    });
    return events.sort((p, q) => p.firstCycle - q.firstCycle);
  }
}

// Padded in front, so that the conditions start with a word.
function watchPort({ checks }: Circuit, { outputs }: ModelLayout): Port {
  const conditions = checks.map(({ when }) => when);
  const padding = new Array<number>(outputs.words * 32 - outputs.bits).fill(conditions[0]!);
  const nets = Uint32Array.from([...padding, ...conditions]);
  return { name: 'bus checks', msb: nets.length - 1, lsb: 0, isVector: true, nets };
}

function placeOf({ sources }: Circuit, { sourceIndex, offset }: BusCheck) {
  const source = sources[sourceIndex];
  return source === undefined ? {} : { file: source.path, ...source.place(offset) };
}

/** `bus.v:3:11: w: drivers disagree at cycle 12, in 345 cycles`. */
export function busEventText(event: BusEvent): string {
  const { bus, kind, firstCycle, cycles, file, line, column } = event;
  const place = file === undefined ? '' : `${file}:${line}:${column}: `;
  const what = kind === 'conflict' ? 'its drivers disagree' : 'nothing drives it';
  const often = cycles === 1 ? 'in that cycle alone' : `in ${cycles} cycles in all`;
  return `${place}bus ${bus}: ${what} first at cycle ${firstCycle}, ${often}`;
}
