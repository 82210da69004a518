import type { KeptNet } from '../../runtime/model/description.js';
import type { Circuit, Port } from '../circuit/circuit.js';
import { stateNets } from '../circuit/modelLayout.js';
import type { Design } from '../compile.js';
import { type NamedSignal, namedSignals } from './namedSignals.js';
import { plainState } from './plainState.js';

/**
 * Which nets a package can show by name beside its ports and its state: none (`ports`), all that
 * have a name, or those whose full name fits one of the patterns, in which `*` stands for any
 * characters and `?` for one.
 */
export type KeepNames = 'ports' | 'all' | readonly string[];

/** The nets of a package that can be looked at. */
export interface KeptNets {
  readonly nets: readonly KeptNet[];
  /** For each of `nets` the nets of the circuit, as a port. */
  readonly ports: readonly Port[];
  /** Outputs to compute for them, in the order of the row that `KeptNet.from` points to. */
  readonly probes: readonly Port[];
}

/** Chooses the nets to keep: all state, and what `keep` says. Ports of the top are none of them. */
export function keptNets(design: Design, keep: KeepNames): KeptNets {
  const { circuit, layout } = design;
  const keeper = new Keeper(circuit, plainState(design));
  const isWanted = wanted(keep);
  for (const found of namedSignals(circuit)) {
    if (keeper.isPort(found)) keeper.cover(found.nets);
    else if (keeper.areState(found.nets) && !found.isPin) keeper.add(found);
    else if (isWanted(found)) keeper.add(found);
  }
  keeper.addRest(layout.stateNames);
  return keeper;
}

type Shown = Pick<NamedSignal, 'name' | 'msb' | 'lsb' | 'isVector' | 'nets'>;

class Keeper implements KeptNets {
  readonly nets: KeptNet[] = [];
  readonly ports: Port[] = [];
  readonly probes: Port[] = [];
  readonly #names = new Set<string>();
  readonly #portNames: ReadonlySet<string>;
  readonly #state: Uint32Array;
  readonly #isState: ReadonlySet<number>;
  readonly #plain: ReadonlyMap<number, number>;
  readonly #covered = new Set<number>();
  readonly #probeAt = new Map<string, number>();
  #offset = 0;

  constructor(circuit: Circuit, plain: ReadonlyMap<number, number>) {
    this.#portNames = new Set([...circuit.inputs, ...circuit.outputs].map(({ name }) => name));
    this.#state = stateNets(circuit);
    this.#isState = new Set(this.#state);
    this.#plain = plain;
  }

  isPort({ scope, name }: NamedSignal): boolean {
    return scope === 0 && this.#portNames.has(name);
  }

  areState(nets: Uint32Array): boolean {
    return nets.every((net) => this.#isState.has(net));
  }

  /** Says that nets, as far as they are state, are shown. */
  cover(nets: Uint32Array): void {
    for (const net of nets) this.#covered.add(net);
  }

  add({ name, msb, lsb, isVector, nets }: Shown): void {
    if (this.#names.has(name) || nets.length === 0) return;
    this.#names.add(name);
    this.cover(nets);
    const port = { name, msb, lsb, isVector, nets };
    this.ports.push(port);
    this.nets.push({ name, width: nets.length, msb, lsb, from: this.#sourceOf(port) });
  }

  /** State that no signal as a whole has shown, bit by bit. */
  addRest(stateNames: readonly string[]): void {
    for (const [element, name] of stateNames.entries()) {
      const net = this.#state[element]!;
      if (this.#covered.has(net) || this.#portNames.has(name)) continue;
      this.add({ name, msb: 0, lsb: 0, isVector: false, nets: Uint32Array.of(net) });
    }
  }

  #sourceOf(port: Port): KeptNet['from'] {
    const elements = Array.from(port.nets, (net) => this.#plain.get(net));
    if (elements.every((element) => element !== undefined)) return elements;
    const key = port.nets.join();
    const known = this.#probeAt.get(key);
    if (known !== undefined) return known;
    const at = this.#offset;
    this.#offset += port.nets.length;
    this.#probeAt.set(key, at);
    this.probes.push(port);
    return at;
  }
}

function wanted(keep: KeepNames): (found: NamedSignal) => boolean {
  if (keep === 'ports') return () => false;
  if (keep === 'all') return ({ isPin }) => !isPin;
  const patterns = keep.map(patternOf);
  return ({ name }) => patterns.some((pattern) => pattern.test(name));
}

const patternOf = (pattern: string): RegExp => {
  const text = pattern
    .replace(/[\\^$.|+()[\]{}]/g, '\\$&')
    .replaceAll('*', '.*')
    .replaceAll('?', '.');
  return new RegExp(`^${text}$`, 's');
};

/** `a.b.timer[11:0]` as it is declared, `a.b.q` for a scalar. */
export function declaredName({ name, width, msb, lsb }: KeptNet): string {
  return width === 1 && msb === lsb ? name : `${name}[${msb}:${lsb}]`;
}
