import { type ModelLayout, rowStride } from '../../runtime/layout.js';
import type { RunBlock } from '../../runtime/stream.js';
import type { Circuit, Port } from '../circuit/circuit.js';
import { shareLoops } from '../circuit/loops.js';
import { modelLayout } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';
import type { OutletBlock, WatchedPlace } from './outlets/outlet.js';

/**
 * Nets that are watched while a circuit runs: outputs behind the circuit's own, in words of their
 * own, which are taken out of the response again.
 */
export class WatchedNets {
  /** The design to run in place of the one given. */
  readonly design: Design;
  readonly #own: ModelLayout;
  readonly #run: ModelLayout;
  readonly #firstWords: readonly number[];
  #rows = new Uint32Array(0);

  /** Of a design, in groups; those without nets take no room. */
  constructor(design: Design, groups: readonly (ArrayLike<number> | undefined)[]) {
    const { circuit, clocks, layout } = design;
    this.#own = layout;
    this.#run = layout;
    this.design = design;
    let words = layout.outputs.words;
    this.#firstWords = groups.map((group) => {
      const first = words;
      words += Math.ceil((group?.length ?? 0) / 32);
      return first;
    });
    if (words === layout.outputs.words) return;
    const port = watchPort(layout, groups);
    const watched: Circuit = { ...circuit, outputs: [...circuit.outputs, port] };
    shareLoops(circuit, watched);
    this.#run = modelLayout(watched, clocks, layout.threeValued);
    this.design = { ...design, circuit: watched, layout: this.#run };
  }

  /** Where the nets of a group stand. */
  placeOf(group: number): WatchedPlace {
    const { outputs, threeValued } = this.#run;
    return {
      firstWord: this.#firstWords[group]!,
      stride: rowStride(outputs, threeValued),
      toUnknown: threeValued ? outputs.words : undefined,
    };
  }

  /** Tells the circuit's own response from what is watched; its array is used again. */
  split(block: RunBlock): OutletBlock {
    const isAllOwn = this.#run === this.#own || block.rows.length === 0;
    const rows = isAllOwn ? block.rows : this.#ownRows(block);
    // Field by field: blocks may be of one cycle, and a spread costs as much as all else.
    const { firstCycle, cycles, stimulus, stimulusStride } = block;
    return { firstCycle, cycles, rows, stimulus, stimulusStride, watched: block.rows };
  }

  /** The first cycles of a block. */
  cut(block: OutletBlock, cycles: number): OutletBlock {
    if (cycles === block.cycles) return block;
    const rows = block.rows.subarray(
      0,
      cycles * rowStride(this.#own.outputs, this.#own.threeValued),
    );
    const watched = block.watched.subarray(
      0,
      cycles * rowStride(this.#run.outputs, this.#run.threeValued),
    );
    return { ...block, cycles, rows, watched };
  }

  #ownRows({ cycles, rows }: RunBlock): Uint32Array {
    const { outputs, threeValued } = this.#own;
    const { words, bits } = outputs;
    const groups = threeValued ? 2 : 1;
    const from = rowStride(this.#run.outputs, threeValued);
    const to = rowStride(outputs, threeValued);
    // What pads the last word in the watched row is no part of the response.
    const lastWord = bits % 32 === 0 ? -1 : (1 << (bits % 32)) - 1;
    if (this.#rows.length < cycles * to) this.#rows = new Uint32Array(cycles * to);
    for (let row = 0; row < cycles; row++) {
      for (let group = 0; group < groups; group++) {
        const start = row * from + group * this.#run.outputs.words;
        const place = row * to + group * words;
        for (let word = 0; word < words; word++) this.#rows[place + word] = rows[start + word]!;
        if (words > 0) this.#rows[place + words - 1]! &= lastWord;
      }
    }
    return this.#rows.subarray(0, cycles * to);
  }
}

// Each group is padded in front of the next one, so that it starts with a word.
function watchPort(
  { outputs }: ModelLayout,
  groups: readonly (ArrayLike<number> | undefined)[],
): Port {
  const filling = groups.find((group) => group !== undefined && group.length > 0)![0]!;
  const nets = new Array<number>(outputs.words * 32 - outputs.bits).fill(filling);
  for (const group of groups) {
    if (group === undefined) continue;
    for (let i = 0; i < group.length; i++) nets.push(group[i]!);
    for (let i = group.length; i % 32 !== 0; i++) nets.push(filling);
  }
  const { length } = nets;
  return { name: 'watched', msb: length - 1, lsb: 0, isVector: true, nets: Uint32Array.from(nets) };
}
