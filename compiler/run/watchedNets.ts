import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import type { RunBlock } from '../../runtime/stream.js';
import type { Circuit, Port } from '../circuit/circuit.js';
import { shareLoops } from '../circuit/loops.js';
import { modelLayout } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';
import type { OutletBlock, OutletPlan, WatchedPlace } from './outlets/outlet.js';

/** What an outlet watches; see `OutletPlan`. */
type Watch = Pick<OutletPlan, 'watch' | 'flags'>;

/**
 * Nets that are watched while a circuit runs: outputs behind the circuit's own, which are taken out
 * of the response again. Flags come first, in what is left of the last word where they fit; other
 * nets have words of their own.
 */
export class WatchedNets {
  /** The design to run in place of the one given. */
  readonly design: Design;
  readonly #own: ModelLayout;
  readonly #run: ModelLayout;
  readonly #firstBits: readonly { readonly watch: number; readonly flags: number }[];
  #rows = new Uint32Array(0);

  /** Of a design, for some outlets; those without nets take no room. */
  constructor(design: Design, outlets: readonly Watch[]) {
    const { circuit, clocks, layout } = design;
    const bits = new AddedBits(layout.outputs.bits);
    const flags = outlets.map((outlet) => bits.add(outlet.flags, false));
    const watch = outlets.map((outlet) => bits.add(outlet.watch, true));
    this.#firstBits = outlets.map((_, i) => ({ watch: watch[i]!, flags: flags[i]! }));
    this.#own = layout;
    this.#run = layout;
    this.design = design;
    if (bits.nets.length === 0) return;
    const watched: Circuit = { ...circuit, outputs: [...circuit.outputs, portOf(bits.nets)] };
    shareLoops(circuit, watched);
    this.#run = modelLayout(watched, clocks, layout.threeValued);
    this.design = { ...design, circuit: watched, layout: this.#run };
  }

  /** Where the nets of an outlet stand, by its number. */
  placeOf(outlet: number): WatchedPlace {
    const { outputs, threeValued } = this.#run;
    const { watch, flags } = this.#firstBits[outlet]!;
    return {
      firstWord: watch >>> 5,
      flagWord: flags >>> 5,
      flagBit: flags & 31,
      stride: rowStride(outputs, threeValued),
      toUnknown: threeValued ? outputs.words : undefined,
    };
  }

  /** Tells the circuit's own response from what is watched; its array is used again. */
  split(block: RunBlock): OutletBlock {
    const isAllOwn = this.#run === this.#own || block.rows.length === 0;
    // Field by field: blocks may be of one cycle, and a spread costs as much as all else.
    const { firstCycle, cycles, rows, stimulus, stimulusStride } = block;
    if (!isAllOwn) return new SharedBlock(block, cycles, () => this.#ownRows(block));
    return { firstCycle, cycles, rows, stimulus, stimulusStride, watched: rows };
  }

  /** The first cycles of a block. */
  cut(block: OutletBlock, cycles: number): OutletBlock {
    if (cycles === block.cycles) return block;
    const { firstCycle, stimulus, stimulusStride } = block;
    const rows = block.rows.subarray(
      0,
      cycles * rowStride(this.#own.outputs, this.#own.threeValued),
    );
    const watched = block.watched.subarray(
      0,
      cycles * rowStride(this.#run.outputs, this.#run.threeValued),
    );
    return { firstCycle, cycles, rows, stimulus, stimulusStride, watched };
  }

  #ownRows({ cycles, rows }: RunBlock): Uint32Array {
    const { outputs, threeValued } = this.#own;
    const { words, bits } = outputs;
    const from = this.#run.outputs.words;
    const groups = threeValued ? 2 * cycles : cycles;
    // What pads the last word in the watched row is no part of the response.
    const lastWord = bits % 32 === 0 ? -1 : (1 << (bits % 32)) - 1;
    if (this.#rows.length < groups * words) this.#rows = new Uint32Array(groups * words);
    const own = this.#rows;
    if (words > 0) {
      const last = words - 1;
      for (let group = 0, start = 0, place = 0; group < groups; group++) {
        for (let word = 0; word < last; word++) own[place + word] = rows[start + word]!;
        own[place + last] = rows[start + last]! & lastWord;
        start += from;
        place += words;
      }
    }
    return own.subarray(0, groups * words);
  }
}

/** A block of which the circuit's own rows are only made where somebody looks at them. */
class SharedBlock implements OutletBlock {
  readonly firstCycle: number;
  readonly cycles: number;
  readonly stimulus: Uint32Array;
  readonly stimulusStride: number;
  readonly watched: Uint32Array;
  readonly #make: () => Uint32Array;
  #rows: Uint32Array | undefined;

  constructor(block: RunBlock, cycles: number, make: () => Uint32Array) {
    this.firstCycle = block.firstCycle;
    this.cycles = cycles;
    this.stimulus = block.stimulus;
    this.stimulusStride = block.stimulusStride;
    this.watched = block.rows;
    this.#make = make;
  }

  get rows(): Uint32Array {
    this.#rows ??= this.#make();
    return this.#rows;
  }
}

/** Nets behind the outputs of a circuit, bit by bit. */
class AddedBits {
  readonly nets: number[] = [];
  readonly #before: number;

  constructor(before: number) {
    this.#before = before;
  }

  /** Adds nets in one word, or from the next word on; returns the place of the first one. */
  add(nets: ArrayLike<number> = [], inOwnWords: boolean): number {
    const used = this.#end % 32;
    const fits = used === 0 || (!inOwnWords && used + nets.length <= 32);
    if (!fits) for (let i = used; i < 32 && nets.length > 0; i++) this.nets.push(nets[0]!);
    const first = this.#end;
    for (let i = 0; i < nets.length; i++) this.nets.push(nets[i]!);
    return first;
  }

  get #end(): number {
    return this.#before + this.nets.length;
  }
}

function portOf(nets: readonly number[]): Port {
  const range = { msb: nets.length - 1, lsb: 0, isVector: true };
  return { name: 'watched', ...range, nets: Uint32Array.from(nets) };
}
