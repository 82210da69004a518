import type { Circuit, ValueNames } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { scopePath } from '../../circuit/hierarchy.js';

/** Registers whose values the text gives names: the states of a machine, mostly. */
export interface MachineSummary {
  /** Dotted path of the signal. */
  readonly name: string;
  readonly width: number;
  /** By ascending value. */
  readonly states: readonly { readonly value: number; readonly name: string }[];
}

/** Tells of the state machines of a circuit, as `run --states` names their states. */
export function machineSummaries(circuit: Circuit): MachineSummary[] {
  const { kind, valueNames = [] } = circuit;
  const held = valueNames.filter(({ nets }) =>
    nets.every((net) => kind[net] === GateKind.Register || kind[net] === GateKind.Latch),
  );
  if (held.length === 0) return [];
  const names = namesOfSignals(circuit, held);
  return held.flatMap(({ nets, names: states }): MachineSummary[] => {
    const name = names.get(nets.join());
    if (name === undefined) return [];
    // A copy of the signal in another module may have names of its own; the first one counts.
    names.delete(nets.join());
    return [
      {
        name,
        width: nets.length,
        states: [...states]
          .sort(([p], [q]) => p - q)
          .map(([value, state]) => ({ value, name: state })),
      },
    ];
  });
}

/** The name of a signal that is just the nets of each of these, by their numbers. */
function namesOfSignals(circuit: Circuit, named: readonly ValueNames[]): Map<string, string> {
  const wanted = new Set(named.map(({ nets }) => nets.join()));
  const firsts = new Set(named.map(({ nets }) => nets[0]!));
  const found = new Map<string, string>();
  const { scopeNames, scopeModule, scopeStart, modules, netOf } = circuit.hierarchy;
  for (let scope = 0; scope < scopeNames.length; scope++) {
    for (const { name, offset, width } of modules[scopeModule[scope]!]!.signals) {
      const start = scopeStart[scope]! + offset;
      if (!firsts.has(netOf[start]!)) continue;
      const key = netOf.slice(start, start + width).join();
      if (!wanted.has(key) || found.has(key)) continue;
      const path = scopePath(circuit.hierarchy, scope);
      found.set(key, path === '' ? name : `${path}.${name}`);
    }
  }
  return found;
}
