import type { Circuit } from '../circuit/circuit.js';
import {
  type SignalList,
  signalName,
  signalsOf,
  UnmatchedPattern,
} from '../waveform/signalList.js';

/** Bits that make up a state together. */
export interface StateVector {
  readonly name: string;
  /** Least significant first. */
  readonly nets: Uint32Array;
  /** What the text calls its values; absent where it has no names for them. */
  readonly names?: ReadonlyMap<number, string>;
}

/**
 * The vectors that texts choose: each signal that a pattern matches (see `namePattern`), or all that
 * stand between braces, `{a, b[1:0]}`, as one, the first most significant as IEEE 1364 joins them.
 *
 * Throws `UnmatchedPattern`.
 */
export function stateVectors(circuit: Circuit, texts: readonly string[]): StateVector[] {
  const found = texts.flatMap((text): StateVector[] => {
    const [, inside] = /^\s*\{(.*)\}\s*$/s.exec(text) ?? [];
    if (inside === undefined) {
      if (/^\s*\{/.test(text)) throw new UnmatchedPattern(`${text}: the } is missing`);
      return eachOf(circuit, text);
    }
    const patterns = inside.split(',').map((part) => part.trim());
    if (patterns.includes('')) throw new UnmatchedPattern(`${text}: a name is missing`);
    const parts = patterns.flatMap((pattern) => eachOf(circuit, pattern));
    const nets = parts.toReversed().flatMap((part) => Array.from(part.nets));
    const name = `{${parts.map((part) => part.name).join(', ')}}`;
    return [{ name, nets: Uint32Array.from(nets) }];
  });
  return [...new Map(found.map((vector) => [vector.name, vector])).values()];
}

function eachOf(circuit: Circuit, pattern: string): StateVector[] {
  const list = signalsOf(circuit, [pattern]);
  return Array.from({ length: list.count }, (_, entry) => {
    const nets = netsOf(list, entry);
    const names = namesOf(circuit, nets);
    return { name: signalName(circuit.hierarchy, list, entry), nets, ...(names && { names }) };
  });
}

/** The names of the values of certain nets: those of any signal that is just these. */
function namesOf({ valueNames = [] }: Circuit, nets: Uint32Array): StateVector['names'] {
  const isSame = (other: Uint32Array): boolean =>
    other.length === nets.length && other.every((net, bit) => net === nets[bit]);
  return valueNames.find((named) => isSame(named.nets))?.names;
}

const netsOf = ({ nets, place, width }: SignalList, entry: number): Uint32Array =>
  nets.slice(place[entry]!, place[entry]! + width[entry]!);
