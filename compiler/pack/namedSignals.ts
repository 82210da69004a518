import type { Circuit } from '../circuit/circuit.js';
import { scopePath } from '../circuit/hierarchy.js';
import { stateNets } from '../circuit/modelLayout.js';

/** A signal of an instance. */
export interface NamedSignal {
  readonly scope: number;
  /** With its path: `a.b.q`. */
  readonly name: string;
  readonly msb: number;
  readonly lsb: number;
  readonly isVector: boolean;
  /** The rightmost bit first. */
  readonly nets: Uint32Array;
  /** Whether it is the pin of a cell, and repeats nets that have names further up. */
  readonly isPin: boolean;
}

/**
 * All named signals of a circuit, instances after those they stand in.
 *
 * A cell is an instance without instances whose nets are its pins and what it stores. Of a module
 * with nets of its own, the ports are of interest too.
 */
export function* namedSignals(circuit: Circuit): Generator<NamedSignal> {
  const { modules, scopeModule, scopeParent } = circuit.hierarchy;
  const hasChildren = new Uint8Array(scopeModule.length);
  for (let scope = 1; scope < scopeModule.length; scope++) hasChildren[scopeParent[scope]!] = 1;
  const isState = new Uint8Array(circuit.netCount);
  for (const net of stateNets(circuit)) isState[net] = 1;
  const isNamed = new Uint8Array(circuit.netCount);
  for (let scope = 0; scope < scopeModule.length; scope++) {
    const path = scopePath(circuit.hierarchy, scope);
    const bits = bitsOf(circuit, scope, modules[scopeModule[scope]!]!.bits);
    const isCell =
      scope !== 0 &&
      hasChildren[scope] === 0 &&
      bits.every((net) => isNamed[net] === 1 || isState[net] === 1);
    for (const signal of modules[scopeModule[scope]!]!.signals) {
      const { msb, lsb, isVector, offset, width } = signal;
      const nets = bits.slice(offset, offset + width);
      const isPin = isCell && nets.every((net) => isNamed[net] === 1);
      const name = path === '' ? signal.name : `${path}.${signal.name}`;
      yield { scope, name, msb, lsb, isVector, nets, isPin };
    }
    for (const net of bits) isNamed[net] = 1;
  }
}

const bitsOf = ({ hierarchy }: Circuit, scope: number, count: number): Uint32Array => {
  const start = hierarchy.scopeStart[scope]!;
  return hierarchy.netOf.subarray(start, start + count);
};
