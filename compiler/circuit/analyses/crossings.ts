import type { Circuit } from '../circuit.js';
import { isGate } from '../gates.js';
import { NO_NET } from '../ids.js';
import { gateReaders } from '../readers.js';
import type { ClockRoots } from './clockRoots.js';
import { PinLists } from './pinLists.js';
import { NO_ROOTS } from './rootSets.js';

/** Two registers of different clocks with a path from one to the other. */
export interface Crossing {
  readonly from: number;
  readonly to: number;
}

/**
 * Registers that capture values from registers on clock ports that they do not hang on themselves.
 *
 * Values pass gates, and latches from data to output. A register on a divided or gated clock hangs
 * on the port which that comes from; one on none is left out.
 */
export class Crossings {
  /** The registers that capture such values, in ascending order. */
  readonly captures: Uint32Array;
  readonly #circuit: Circuit;
  readonly #roots: ClockRoots;
  /** Per net: clock ports of the registers that its value comes from. */
  readonly #from: Uint32Array;

  constructor(circuit: Circuit, roots: ClockRoots) {
    this.#circuit = circuit;
    this.#roots = roots;
    const own = roots.registers.roots;
    const isSingle = new Set(own.filter((set) => set !== NO_ROOTS)).size < 2;
    this.#from = isSingle ? new Uint32Array(circuit.netCount) : spread(circuit, roots);
    this.captures = Uint32Array.from(own.keys()).filter((r) =>
      this.#isForeign(r, circuit.registers.data[r]!),
    );
  }

  /** One of the crossings into a register of `captures`. */
  into(register: number): Crossing {
    const { kind, faninStart, fanin, registers, latches } = this.#circuit;
    const registerAt = new PinLists(this.#circuit.netCount, registers.output);
    const latchAt = new PinLists(this.#circuit.netCount, latches.output);
    const seen = new Set<number>();
    const pending: number[] = [];
    const visit = (net: number): void => {
      if (net === NO_NET || seen.has(net) || !this.#isForeign(register, net)) return;
      seen.add(net);
      pending.push(net);
    };
    visit(registers.data[register]!);
    for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
      const from = registerAt.first(net);
      if (from >= 0) return { from, to: register };
      if (latchAt.first(net) >= 0) visit(latches.data[latchAt.first(net)]!);
      if (!isGate(kind[net]!)) continue;
      for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) visit(fanin[i]!);
    }
    throw new Error(`register ${register} captures nothing from another clock`);
  }

  #isForeign(register: number, net: number): boolean {
    const { registers, sets } = this.#roots;
    const own = registers.roots[register]!;
    return own !== NO_ROOTS && !sets.isWithin(this.#from[net]!, own);
  }
}

function spread(circuit: Circuit, { sets, registers: { roots } }: ClockRoots): Uint32Array {
  const { start, reader } = gateReaders(circuit);
  const { registers, latches, netCount } = circuit;
  const from = new Uint32Array(netCount);
  const fed = new PinLists(netCount, latches.data);
  const pending: number[] = [];
  const raise = (net: number, set: number): void => {
    const union = sets.union(from[net]!, set);
    if (union === from[net]) return;
    from[net] = union;
    pending.push(net);
  };
  registers.output.forEach((net, r) => {
    raise(net, roots[r]!);
  });
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    const set = from[net]!;
    for (let i = start[net]!; i < start[net + 1]!; i++) raise(reader[i]!, set);
    for (let l = fed.first(net); l >= 0; l = fed.next(l)) raise(latches.output[l]!, set);
  }
  return from;
}
