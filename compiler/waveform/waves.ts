import { directSources, INVERTED, NOT_DIRECT } from '../circuit/directSources.js';
import type { Design } from '../compile.js';
import type { SignalList } from './signalList.js';

/** What the signals of a list show: signals of the same nets share a wave. */
export interface Waves {
  readonly count: number;
  /** Place among the nets of the list of each wave's rightmost bit, and its width. */
  readonly place: Uint32Array;
  readonly width: Uint32Array;
  /** The wave of each entry of the list. */
  readonly ofSignal: Uint32Array;
  /** The wave of each net of the list. */
  readonly ofNet: Uint32Array;
  /** Of each wave, twice the clock that it is a copy of, plus 1 if inverted; -1 of most waves. */
  readonly clock: Int32Array;
}

/** Finds the waves of a list, and those that are clocks or come from one through buffers. */
export function wavesOf({ circuit, clocks }: Design, list: SignalList): Waves {
  const { nets } = list;
  const ofNet = new Uint32Array(nets.length);
  const widthAt = new Uint32Array(nets.length);
  for (let i = 0; i < list.count; i++) widthAt[list.place[i]!] = list.width[i]!;
  const place: number[] = [];
  for (let bit = 0; bit < nets.length; bit += widthAt[bit]!) {
    ofNet.fill(place.length, bit, bit + widthAt[bit]!);
    place.push(bit);
  }
  const clockOf = new Map(clocks.ports.map(({ net }, clock) => [net as number, clock]));
  const direct = directSources(circuit);
  const clock = Int32Array.from(place, (bit) => {
    const source = direct[nets[bit]!]!;
    if (widthAt[bit] !== 1 || source === NOT_DIRECT) return -1;
    const found = clockOf.get(source >>> 1);
    return found === undefined ? -1 : 2 * found + (source & INVERTED);
  });
  return {
    count: place.length,
    place: Uint32Array.from(place),
    width: Uint32Array.from(place, (bit) => widthAt[bit]!),
    ofSignal: list.place.map((bit) => ofNet[bit]!),
    ofNet,
    clock,
  };
}
