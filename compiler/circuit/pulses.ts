import type { Circuit } from './circuit.js';
import { NO_NET } from './ids.js';
import { Lists } from './lists.js';
import { loopsOf, SettlingSources } from './loops.js';

/** Registers that set or reset themselves, and all that the pulses of these reach. */
export interface Pulses {
  /** The registers of `Loops.delayed`. */
  readonly delayed: readonly number[];
  readonly isDelayed: Uint8Array;
  /**
   * Per register a 1 where its set or reset follows from a delayed register: an edge of its clock
   * that comes in the wave in which the pulse ends comes too early for it, since the end of the
   * pulse has a longer way through gates than the edge.
   */
  readonly isGuarded: Uint8Array;
}

const known = new WeakMap<Circuit, Pulses>();

/** The pulses of a circuit; found once for each circuit. */
export function pulsesOf(circuit: Circuit): Pulses {
  const pulses = known.get(circuit) ?? findPulses(circuit);
  known.set(circuit, pulses);
  return pulses;
}

function findPulses(circuit: Circuit): Pulses {
  const { registers, netCount } = circuit;
  const { delayed: isDelayed } = loopsOf(circuit);
  const delayed = [...isDelayed.keys()].filter((r) => isDelayed[r] === 1);
  const isGuarded = new Uint8Array(registers.count);
  if (delayed.length === 0) return { delayed, isDelayed, isGuarded };
  const reached = reachedFrom(
    circuit,
    delayed.map((r) => registers.output[r]!),
  );
  for (let r = 0; r < registers.count; r++) {
    const pins = [registers.set[r]!, registers.reset[r]!];
    if (pins.some((net) => net !== NO_NET && net < netCount && reached[net] === 1))
      isGuarded[r] = 1;
  }
  return { delayed, isDelayed, isGuarded };
}

/** Marks what follows from some nets while the logic settles. */
function reachedFrom(circuit: Circuit, nets: readonly number[]): Uint8Array {
  const readers = settlingReaders(circuit);
  const reached = new Uint8Array(circuit.netCount);
  const pending = [...nets];
  for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
    if (reached[net] === 1) continue;
    reached[net] = 1;
    for (const reader of readers.of(net)) pending.push(reader);
  }
  return reached;
}

function settlingReaders(circuit: Circuit): Lists {
  const sources = new SettlingSources(circuit);
  return new Lists(circuit.netCount, (add) => {
    for (let net = 0; net < circuit.netCount; net++) {
      for (let i = 0, source = sources.at(net, 0); source !== -1; source = sources.at(net, ++i)) {
        add(source, net);
      }
    }
  });
}
