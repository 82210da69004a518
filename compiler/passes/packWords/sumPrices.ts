import type { Lists } from '../../circuit/lists.js';
import { FALSE, isInverted, LogicOp } from '../../logic/logic.js';
import type { Addition } from '../additions/addition.js';
import { Cost } from './cost.js';
import { isFilled, sumOfWord } from './numberPlan.js';
import { chunksOf, type Pack, type Packs, SUM } from './packs.js';

/** What additions cost, but for bringing together what they add, and what they spare. */
export class SumPrices {
  readonly #packs: Packs;
  readonly #readers: Lists;
  /** Per addition, the cost of the nodes that nothing needs if it stands. */
  readonly #spared: readonly number[];

  constructor(packs: Packs, readers: Lists, bitCost: (node: number) => number) {
    this.#packs = packs;
    this.#readers = readers;
    const isCounted = packs.isDead.slice();
    this.#spared = packs.additions.map(({ sum }) => {
      let cost = 0;
      const stack = sum.flatMap((literal) => (literal < 0 ? [] : [literal >>> 1]));
      const results = new Set(stack);
      for (let node = stack.pop(); node !== undefined; node = stack.pop()) {
        if (isCounted[node] === 1) cost += bitCost(node);
        else if (!results.has(node)) continue;
        isCounted[node] = 0;
        const { op, a, b, c } = packs.logic;
        if (op[node]! < LogicOp.And) continue;
        const below = [a[node]!, b[node]!, ...(op[node] === LogicOp.Mux ? [c[node]!] : [])];
        for (const literal of below) {
          if (isCounted[literal >>> 1] === 1) stack.push(literal >>> 1);
        }
      }
      return cost;
    });
  }

  /** The cost of the nodes that nothing needs for the sake of an addition, those of its sum apart. */
  spared(addition: number): number {
    return this.#spared[addition]!;
  }

  /** What a pack of bits of a sum costs; the first one bears what all have in common. */
  cost(number: number, { sum }: Pack): number {
    const packs = this.#packs.packsOfAddition[sum!.addition]!;
    const own = this.#isSpread(number) ? Cost.bits : 0;
    if (number !== packs[0]) return own;
    const isSpread = packs.some((pack) => this.#isSpread(pack));
    return (
      own + (isSpread ? Cost.bytes : 0) + this.#additionCost(this.#packs.additions[sum!.addition]!)
    );
  }

  #additionCost({ words, width, constant }: Addition): number {
    let cost = (words.length - 1 + Number(constant !== 0n)) * Cost.arithmetic;
    for (const word of words) {
      const inverted = word.some(isInverted);
      if (inverted) cost += Cost.arithmetic;
      if (sumOfWord(this.#packs, word) !== undefined) continue;
      const chunks = chunksOf(word, width).filter((tuple) => tuple.some((literal) => literal >= 0));
      cost += chunks.length * Cost.number + (chunks.length - 1) * Cost.joinNumber;
      if (word.includes(FALSE) && !isFilled(word, width)) cost += Cost.arithmetic;
    }
    return cost;
  }

  // Whether anything but other sums reads its bits.
  #isSpread(number: number): boolean {
    const { logic, packOf } = this.#packs;
    return this.#packs.get(number)!.nodes.some((node) => {
      if (node < 0) return false;
      const isOther = (by: number): boolean =>
        by >= logic.nodeCount || this.#packs.get(packOf[by]!)?.op !== SUM;
      return this.#readers.of(node).some(isOther);
    });
  }
}
