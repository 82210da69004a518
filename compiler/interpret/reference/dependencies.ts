import type { Circuit } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { NO_NET } from '../../circuit/ids.js';
import { loopsOf } from '../../circuit/loops.js';
import { clockPins } from '../../circuit/memoryPorts.js';
import type { ActiveTables } from '../../circuit/tables/activeTables.js';
import { eachSettler } from '../../circuit/tables/settlers.js';

/** Who must be evaluated again when a net changes, and what it clocks. */
export interface Dependencies {
  /** For net n, `reader[readerStart[n]] … reader[readerStart[n + 1] - 1]`. */
  readonly readerStart: Uint32Array;
  readonly reader: Uint32Array;
  /**
   * In the same form, by clock net: indices of registers, and behind them of the write ports of
   * memories.
   */
  readonly clockedStart: Uint32Array;
  readonly clocked: Uint32Array;
  /** Index of the register or latch that drives a net; meaningless for other nets. */
  readonly elementOf: Uint32Array;
}

/**
 * Lists, for each net, the nets whose value follows from it while the logic settles: gates read
 * their fan-in, latches all their pins, registers their asynchronous set and reset, cells that go
 * by a table what acts at once. Such cells are not clocked. Registers of `Loops.delayed` read nothing.
 */
export function dependenciesOf(circuit: Circuit, tables: ActiveTables): Dependencies {
  const { netCount, registers, latches } = circuit;
  const elementOf = new Uint32Array(netCount);
  registers.output.forEach((net, index) => {
    elementOf[net] = index;
  });
  latches.output.forEach((net, index) => {
    elementOf[net] = index;
  });
  const readers = grouped(netCount, (add) => eachRead(circuit, elementOf, tables, add));
  const clocks = grouped(netCount, (add) => {
    for (const [pin, net] of clockPins(circuit).clock.entries()) {
      if (pin >= registers.count || tables.of(registers.output[pin]!) < 0) add(net, pin);
    }
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

function eachRead(
  circuit: Circuit,
  elementOf: Uint32Array,
  tables: ActiveTables,
  add: AddPair,
): void {
  const { netCount, kind, faninStart, fanin, registers, latches } = circuit;
  const { delayed } = loopsOf(circuit);
  const addPin = (pin: number, net: number) => {
    if (pin !== NO_NET) add(pin, net);
  };
  for (let net = 0; net < netCount; net++) {
    const element = elementOf[net]!;
    // What is added below is all that such a cell reads.
    if (tables.of(net) >= 0) continue;
    if (kind[net] === GateKind.Register && delayed[element] === 1) continue;
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
  // Also where a run does without the table: what is a loop must not depend on the run.
  eachSettler(circuit, (output, nets) => {
    if (kind[output] === GateKind.Register && delayed[elementOf[output]!] === 1) return;
    for (const net of nets) add(net, output);
  });
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
