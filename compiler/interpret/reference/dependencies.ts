import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { NO_NET } from '../../circuit/ids.js';

/** Who must be evaluated again when a net changes, and the registers that it clocks. */
export interface Dependencies {
  /** For net n, `reader[readerStart[n]] … reader[readerStart[n + 1] - 1]`. */
  readonly readerStart: Uint32Array;
  readonly reader: Uint32Array;
  /** In the same form, register indices by clock net. */
  readonly clockedStart: Uint32Array;
  readonly clocked: Uint32Array;
  /** Index of the register or latch that drives a net; meaningless for other nets. */
  readonly elementOf: Uint32Array;
}

/**
 * Lists, for each net, the nets whose value follows from it while the logic settles: gates read
 * their fan-in, latches all their pins, registers their asynchronous set and reset.
 */
export function dependenciesOf(circuit: Circuit): Dependencies {
  const { netCount, registers, latches } = circuit;
  const elementOf = new Uint32Array(netCount);
  registers.output.forEach((net, index) => {
    elementOf[net] = index;
  });
  latches.output.forEach((net, index) => {
    elementOf[net] = index;
  });
  const readers = grouped(netCount, (add) => eachRead(circuit, elementOf, add));
  const clocks = grouped(netCount, (add) => {
    for (let i = 0; i < registers.count; i++) add(registers.clock[i]!, i);
  });
  return {
    readerStart: readers.start,
    reader: readers.members,
    clockedStart: clocks.start,
    clocked: clocks.members,
    elementOf,
  };
}

type AddPair = (group: number, member: number) => void;

function eachRead(circuit: Circuit, elementOf: Uint32Array, add: AddPair): void {
  const { netCount, kind, faninStart, fanin, registers, latches } = circuit;
  const addPin = (pin: number, net: number) => {
    if (pin !== NO_NET) add(pin, net);
  };
  for (let net = 0; net < netCount; net++) {
    const element = elementOf[net]!;
    if (kind[net] === GateKind.Register) {
      addPin(registers.set[element]!, net);
      addPin(registers.reset[element]!, net);
    } else if (kind[net] === GateKind.Latch) {
      addPin(latches.enable[element]!, net);
      addPin(latches.data[element]!, net);
      addPin(latches.set[element]!, net);
      addPin(latches.reset[element]!, net);
    } else {
      for (let i = faninStart[net]!; i < faninStart[net + 1]!; i++) add(fanin[i]!, net);
    }
  }
}

// Two walks, one to count and one to place, need no list of pairs.
function grouped(groups: number, walk: (add: AddPair) => void) {
  const start = new Uint32Array(groups + 1);
  walk((group) => {
    start[group + 1]!++;
  });
  for (let group = 0; group < groups; group++) start[group + 1]! += start[group]!;
  const members = new Uint32Array(start[groups]!);
  const next = start.slice(0, groups);
  walk((group, member) => {
    members[next[group]!++] = member;
  });
  return { start, members };
}
