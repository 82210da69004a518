import { type Circuit, Edge } from '../circuit/circuit.js';
import { directSources, INVERTED, NOT_DIRECT } from '../circuit/directSources.js';
import { GateKind, isGate } from '../circuit/gates.js';
import { NO_NET } from '../circuit/ids.js';
import { describeNets } from '../circuit/netPlaces.js';
import { ActiveTables } from '../circuit/tables/activeTables.js';
import type { Design } from '../compile.js';

/**
 * Tells why a cycle of a design is more than one settling and one commit; undefined where it is
 * just that.
 *
 * It is where all registers capture at the same edge of clocks that reach them through buffers and
 * inverters alone, where there are no latches, and where set and reset come from data inputs alone.
 */
export function obstacleToOneStep(design: Design): string | undefined {
  const { circuit, clocks, layout, schedule } = design;
  if (layout.threeValued) return 'the run is three-valued';
  // Sampling, the active edge and the return of all clocks.
  const isPlain = schedule.shapes.length === 1 && schedule.shapes[0]!.steps.length === 3;
  if (!isPlain) return 'the clocks tick each at its own pace';
  const { registers, latches } = circuit;
  const [memory] = circuit.memories;
  if (memory !== undefined) return `there is a memory: ${memory.name}`;
  const [entry] = new ActiveTables(circuit, false).entries;
  if (entry !== undefined) {
    return `${describeNets(circuit, [circuit.tables.output[entry]!])} runs from its table`;
  }
  if (latches.count > 0) {
    return `there are latches: ${describeNets(circuit, latches.output, 1)}`;
  }
  const ticking = new Map<number, 0 | 1>(clocks.ports.map(({ net, inactive }) => [net, inactive]));
  const direct = directSources(circuit);
  for (let i = 0; i < registers.count; i++) {
    const source = direct[registers.clock[i]!]!;
    const inactive = source === NOT_DIRECT ? undefined : ticking.get(source >>> 1);
    if (inactive === undefined) {
      return `logic drives the clock pin of ${describeNets(circuit, [registers.output[i]!])}`;
    }
    const rises = (registers.edge[i] === Edge.Rising) !== ((source & INVERTED) !== 0);
    if (rises !== (inactive === 0)) {
      return `${describeNets(circuit, [registers.output[i]!])} captures when the clock returns`;
    }
  }
  const control = controlledByMore(circuit, ticking);
  return control === undefined
    ? undefined
    : `set or reset of ${describeNets(circuit, [control])} depends on more than data inputs`;
}

/** The output of a register whose set or reset depends on a register or a clock. */
function controlledByMore(
  circuit: Circuit,
  ticking: ReadonlyMap<number, unknown>,
): number | undefined {
  const { registers, kind, faninStart, fanin } = circuit;
  const visited = new Uint8Array(circuit.netCount);
  for (let i = 0; i < registers.count; i++) {
    const pending = [registers.set[i]!, registers.reset[i]!];
    for (let net = pending.pop(); net !== undefined; net = pending.pop()) {
      if (net === NO_NET || visited[net] === 1) continue;
      visited[net] = 1;
      if (kind[net] === GateKind.Register || ticking.has(net)) return registers.output[i]!;
      if (!isGate(kind[net]!)) continue;
      for (let k = faninStart[net]!; k < faninStart[net + 1]!; k++) pending.push(fanin[k]!);
    }
  }
  return undefined;
}
