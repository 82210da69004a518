import { nodeOf } from '../../logic/logic.js';
import type { RowSink } from '../../program/vectorCode.js';
import { Cost } from './cost.js';
import { LANES, type Packs, type Tuple } from './packs.js';
import type { Source, VectorPlan } from './vectorPlan.js';

/** Bits of a byte, and bytes of a word, of the response row. */
const BITS = 8;
const BYTES = 4;

/** Up to sixteen bytes of the row of which each bit comes from one pack. */
interface Stack {
  /** Per lane its byte of the row, or -1. */
  readonly bytes: number[];
  count: number;
  /** What it costs to make them. */
  readonly cost: number;
}

/**
 * Makes words of the response row whose bytes lie across packs: bit k of several bytes is in lanes
 * of one pack. Eight such packs laid over each other are bytes of the row, up to sixteen at a time,
 * where bringing sixteen bits together would take lanes of eight packs and more, again and again.
 *
 * Words whose bits are few packs anyway, or no packs, are left to others.
 */
export function stackedRows(packs: Packs, plan: VectorPlan): RowSink[] {
  const rows = new Rows(packs);
  return rows.sinks(plan);
}

class Rows {
  readonly #packs: Packs;
  readonly #stackOf = new Map<number, { stack: Stack; lane: number }>();
  readonly #open = new Map<string, Stack[]>();

  constructor(packs: Packs) {
    this.#packs = packs;
    const words = Math.floor(packs.logic.outputs.length / (BITS * BYTES));
    for (let byte = 0; byte < words * BYTES; byte++) this.#place(byte);
  }

  sinks(plan: VectorPlan): RowSink[] {
    const chosen = this.#chosenWords();
    const steps = new Map<Stack, number>();
    const sinks: RowSink[] = [];
    for (const [chunk, words] of chosen) {
      const sources = new Map<Stack, number[]>();
      for (const word of words) {
        for (let i = 0; i < BYTES; i++) {
          const to = word * BYTES + i;
          const { stack, lane } = this.#stackOf.get(chunk * LANES + to)!;
          const from = sources.get(stack) ?? new Array<number>(LANES).fill(-1);
          from[to] = lane;
          sources.set(stack, from);
        }
      }
      const joined = [...sources].map(([stack, from]): Source => {
        let step = steps.get(stack);
        if (step === undefined) {
          step = plan.stacked(this.#tuplesOf(stack));
          steps.set(stack, step);
        }
        return { step, from };
      });
      sinks.push({ step: plan.joined(joined), to: chunk * LANES, words });
    }
    return sinks;
  }

  // Bytes of the same packs share a stack, each in the lane where most of its bits are.
  #place(byte: number): void {
    const { packOf, laneOf } = this.#packs;
    const nodes = this.#bitsOf(byte).map(nodeOf);
    if (nodes.some((node) => packOf[node]! < 0)) return;
    const lanes = nodes.map((node) => laneOf[node]!);
    const lane = mostFrequent(lanes);
    const moved = lanes.filter((each) => each !== lane).length;
    const key = `${nodes.map((node) => packOf[node]!).join()} ${moved}`;
    const stacks = this.#open.get(key) ?? [];
    this.#open.set(key, stacks);
    let stack = stacks.find(({ bytes }) => bytes[lane] === -1);
    if (stack === undefined) {
      const cost = (BITS - 1) * Cost.stack + moved * Cost.permute;
      stack = { bytes: new Array<number>(LANES).fill(-1), count: 0, cost };
      stacks.push(stack);
    }
    stack.bytes[lane] = byte;
    stack.count++;
    this.#stackOf.set(byte, { stack, lane });
  }

  // Per chunk of sixteen bytes the words that are cheaper this way.
  #chosenWords(): Map<number, number[]> {
    const chosen = new Map<number, number[]>();
    const words = Math.floor(this.#packs.logic.outputs.length / (BITS * BYTES));
    for (let word = 0; word < words; word++) {
      const bytes = Array.from({ length: BYTES }, (_, i) => word * BYTES + i);
      const placed = bytes.map((byte) => this.#stackOf.get(byte)?.stack);
      const stacks = new Set(placed);
      if (stacks.has(undefined)) continue;
      const share = placed.reduce((cost, stack) => cost + stack!.cost / stack!.count, 0);
      const cost = share + Cost.permute + (stacks.size - 1) * Cost.join;
      if (cost >= this.#halfCost(bytes.slice(0, 2)) + this.#halfCost(bytes.slice(2))) continue;
      const chunk = (word * BYTES) / LANES;
      const others = chosen.get(Math.floor(chunk)) ?? [];
      chosen.set(Math.floor(chunk), [...others, word % (LANES / BYTES)]);
    }
    return chosen;
  }

  // What sixteen bits brought together one pack after another would cost.
  #halfCost(bytes: readonly number[]): number {
    const { packOf, laneOf } = this.#packs;
    const nodes = bytes.flatMap((byte) => this.#bitsOf(byte).map(nodeOf));
    const sources = new Set(nodes.map((node) => packOf[node]!));
    if (sources.size > 1) return Cost.half + (sources.size - 1) * Cost.join;
    return Cost.half + (nodes.every((node, lane) => laneOf[node] === lane) ? 0 : Cost.permute);
  }

  #tuplesOf({ bytes }: Stack): Tuple[] {
    return Array.from({ length: BITS }, (_, bit) =>
      bytes.map((byte) => (byte < 0 ? -1 : this.#bitsOf(byte)[bit]!)),
    );
  }

  #bitsOf(byte: number): number[] {
    return this.#packs.logic.outputs.slice(byte * BITS, (byte + 1) * BITS);
  }
}

function mostFrequent(lanes: readonly number[]): number {
  const counts = new Array<number>(LANES).fill(0);
  for (const lane of lanes) counts[lane]!++;
  return counts.indexOf(Math.max(...counts));
}
