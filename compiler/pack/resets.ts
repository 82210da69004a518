import type { Circuit } from '../circuit/circuit.js';
import { directSources, INVERTED, NOT_DIRECT } from '../circuit/directSources.js';
import { NO_NET } from '../circuit/ids.js';

/** An input that sets or resets registers and latches at once, without waiting for a clock. */
export interface ResetPort {
  readonly name: string;
  /** The value at which it acts. */
  readonly active: 0 | 1;
  /** How many registers and latches it acts on. */
  readonly elements: number;
}

/** One-bit input ports that hang, directly or behind inverters, on set and reset pins. */
export function resetPorts(circuit: Circuit): ResetPort[] {
  const { registers, latches, inputs } = circuit;
  const source = directSources(circuit);
  const counts = new Map<number, number>();
  for (const table of [registers, latches]) {
    for (let i = 0; i < table.count; i++) {
      for (const from of new Set(
        [table.set[i]!, table.reset[i]!].map((net) => originOf(source, net)),
      )) {
        if (from !== NOT_DIRECT) counts.set(from, (counts.get(from) ?? 0) + 1);
      }
    }
  }
  return inputs
    .filter(({ nets }) => nets.length === 1)
    .flatMap(({ name, nets }) => {
      const [high, low] = [nets[0]! * 2, nets[0]! * 2 + INVERTED].map(
        (from) => counts.get(from) ?? 0,
      );
      if (high === 0 && low === 0) return [];
      return [{ name, active: high! >= low! ? 1 : 0, elements: high! + low! } as const];
    });
}

const originOf = (source: Uint32Array, net: number): number =>
  net === NO_NET ? NOT_DIRECT : source[net]!;
