import type { Packs } from './packs.js';
import { Prices } from './prices.js';

/** Sweeps over all packs; few are dissolved after the first ones. */
const MOST_SWEEPS = 8;

/**
 * Dissolves packs that cost more than they save: what they read must be brought together first, and
 * who reads single lanes pays for that.
 */
export function prunePacks(packs: Packs): void {
  const prices = new Prices(packs);
  for (let sweep = 0; sweep < MOST_SWEEPS; sweep++) {
    let dissolved = 0;
    const gains: [gain: number, pack: number][] = [];
    for (const [number, pack] of packs.standing()) {
      const gain = prices.gain(number, pack);
      if (gain < 0) gains.push([gain, number]);
    }
    gains.sort(([p], [q]) => p - q);
    for (const [, number] of gains) {
      // What was dissolved before it may have changed the sum.
      const pack = packs.get(number);
      if (pack === undefined || prices.gain(number, pack) >= 0) continue;
      packs.dissolve(number);
      dissolved++;
    }
    if (dissolved === 0) return;
  }
}
