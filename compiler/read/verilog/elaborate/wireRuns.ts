import type { Position } from '../../../diagnostics/sourceMap.js';
import type { NameId } from '../../names.js';
import type { PlainNames } from '../plainNames.js';

/** Wires with consecutive nets whose names follow each other in a list. */
interface Run {
  readonly names: PlainNames;
  /** Of the first wire: its place in `names`, its net, and its place in the scope. */
  readonly first: number;
  readonly net: number;
  readonly place: number;
  /** Symbols of other kinds before the run. */
  readonly others: number;
  readonly traits: number;
  count: number;
}

/**
 * The plain wires of a scope by their nets, in the order of both. A flat netlist has a million of
 * them, which take no memory beside that of the syntax.
 */
export class WireRuns {
  readonly #runs: Run[] = [];
  #count = 0;
  /** The run asked for last. */
  #last = 0;
  /** Traits of the few wires that have got others. */
  readonly #changed = new Map<number, number>();

  get count(): number {
    return this.#count;
  }

  /** Adds a wire behind all others; `others` is how many symbols of other kinds came before. */
  add(names: PlainNames, index: number, net: number, traits: number, others: number): void {
    const last = this.#runs[this.#runs.length - 1];
    const isNext =
      last?.names === names &&
      last.first + last.count === index &&
      last.net + last.count === net &&
      last.others === others;
    if (isNext && last.traits === traits) last.count++;
    else {
      const place = others + this.#count;
      this.#runs.push({ names, first: index, net, place, others, traits, count: 1 });
    }
    this.#count++;
  }

  name(net: number): NameId {
    const { names, first, net: start } = this.#runOf(net);
    return names.name(first + net - start);
  }

  start(net: number): Position {
    const { names, first, net: start } = this.#runOf(net);
    return names.start(first + net - start);
  }

  end(net: number): Position {
    const { names, first, net: start } = this.#runOf(net);
    return names.end(first + net - start);
  }

  traits(net: number): number {
    return (this.#changed.size > 0 && this.#changed.get(net)) || this.#runOf(net).traits;
  }

  /** Whether a wire has got other traits than it was added with. */
  isChanged(net: number): boolean {
    return this.#changed.size > 0 && this.#changed.has(net);
  }

  setTraits(net: number, traits: number): void {
    this.#changed.set(net, traits);
  }

  /**
   * What stands at a place among all symbols of the scope: the net of a wire, or -1 - i for the i-th
   * symbol of another kind.
   */
  at(place: number): number {
    const run = this.#last < this.#runs.length ? this.#runs[this.#last]! : undefined;
    const isNear = run !== undefined && place >= run.place && place < run.place + run.count;
    const found = isNear ? run : this.#runBefore('place', place);
    if (found === undefined) return -1 - place;
    const offset = place - found.place;
    return offset < found.count ? found.net + offset : -1 - (found.others + offset - found.count);
  }

  #runOf(net: number): Run {
    const last = this.#runs[this.#last]!;
    if (net >= last.net && net < last.net + last.count) return last;
    return this.#runBefore('net', net)!;
  }

  /** The last run that begins at a net or a place, or before it. */
  #runBefore(by: 'net' | 'place', number: number): Run | undefined {
    let low = 0;
    let high = this.#runs.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.#runs[middle]![by] <= number) low = middle + 1;
      else high = middle;
    }
    this.#last = Math.max(low - 1, 0);
    return this.#runs[low - 1];
  }
}
