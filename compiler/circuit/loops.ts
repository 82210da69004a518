import type { Circuit } from './circuit.js';
import { GateKind, isGate } from './gates.js';
import { NO_NET } from './ids.js';
import { memoryPins } from './memoryPorts.js';
import { eachSettler } from './tables/settlers.js';
import { TarjanSearch } from './tarjan.js';

/**
 * The combinational loops of a circuit: sets of nets that depend on one another without a clock
 * edge between. Latches count as transparent, and the asynchronous set and reset of a register
 * reach its output, but for those of `delayed` registers, which break what would be loops.
 *
 * A loop settles in rounds: its nets are evaluated one after another, round after round until a
 * round changes nothing, starting from the values that they had before. Of these, only the `kept`
 * nets are read before they are evaluated, so they are what the loop remembers.
 */
export interface Loops {
  /** All kept nets, loop by loop: state beside that of registers and latches. */
  readonly keptNets: Uint32Array;
  /** Per net: the loop that it belongs to, or -1. */
  readonly loopOf: Int32Array;
  /** The nets of each loop, in the order of evaluation. */
  readonly nets: readonly Uint32Array[];
  /** Of each loop, the gates that one of its nets reads before they are evaluated. */
  readonly kept: readonly Uint32Array[];
  /**
   * Per register a 1 where it has a say in its own set or reset: these act on it in waves, as clock
   * edges do, so that others see the pulse that it gives.
   */
  readonly delayed: Uint8Array;
}

/** Rounds in which a loop of so many nets must settle; one that does not is said to oscillate. */
export const roundLimit = (netCount: number): number => 4 + 2 * netCount;

const known = new WeakMap<Circuit, Loops>();

/** The loops of a circuit; found once for each circuit. */
export function loopsOf(circuit: Circuit): Loops {
  const loops = known.get(circuit) ?? findLoops(circuit);
  known.set(circuit, loops);
  return loops;
}

/**
 * Lets a circuit settle its loops in the same order as another one, from which it differs in output
 * ports and in nets behind the others alone: what else is looked at must not change what a loop
 * does, nor what it remembers.
 */
export function shareLoops(from: Circuit, to: Circuit): void {
  const loops = loopsOf(from);
  const loopOf = new Int32Array(to.netCount).fill(-1);
  loopOf.set(loops.loopOf);
  known.set(to, to.netCount === from.netCount ? loops : { ...loops, loopOf });
}

// Strongly connected components of the settling logic.
function findLoops(circuit: Circuit): Loops {
  const { sources, delayed, components } = brokenUp(circuit);
  const reads = readCounts(circuit);
  const nets = components.map((component) => settlingOrder(sources, component, reads));
  const loopOf = new Int32Array(circuit.netCount).fill(-1);
  nets.forEach((members, loop) => {
    for (const net of members) loopOf[net] = loop;
  });
  const kept = nets.map((members) => keptNets(circuit, sources, loopOf, members));
  const all = Uint32Array.from(kept.flatMap((each) => [...each]));
  return { keptNets: all, loopOf, nets, kept, delayed };
}

// Registers in a component are there by their set or reset: they are taken out of it.
function brokenUp(circuit: Circuit) {
  const { registers, netCount, kind } = circuit;
  const delayed = new Uint8Array(registers.count);
  const search = (sources: SettlingSources) =>
    new TarjanSearch(netCount, (net, i) => sources.at(net, i)).components();
  const whole = new SettlingSources(circuit, delayed);
  const components = search(whole);
  const looping = new Set(
    components.flatMap((nets) => nets.filter((net) => kind[net] === GateKind.Register)),
  );
  if (looping.size === 0) return { sources: whole, delayed, components };
  for (let r = 0; r < delayed.length; r++) if (looping.has(registers.output[r]!)) delayed[r] = 1;
  const sources = new SettlingSources(circuit, delayed);
  return { sources, delayed, components: search(sources) };
}

function keptNets(
  circuit: Circuit,
  sources: SettlingSources,
  loopOf: Int32Array,
  members: Uint32Array,
): Uint32Array {
  const kept = new Set<number>();
  const evaluated = new Set<number>();
  for (const net of members) {
    for (let i = 0, source = sources.at(net, 0); source !== -1; source = sources.at(net, ++i)) {
      const isInside = loopOf[source] === loopOf[net];
      if (isInside && !evaluated.has(source) && isGate(circuit.kind[source]!)) kept.add(source);
    }
    evaluated.add(net);
  }
  return Uint32Array.from(kept).sort();
}

/**
 * The nets of a loop in the order of their evaluation: depth first from the one that is read most
 * (of several the lowest), each after what it reads as far as the loop allows. So an expression is
 * whole before its target takes it, and what the loop remembers is what others look at.
 */
function settlingOrder(
  sources: SettlingSources,
  members: readonly number[],
  reads: Uint32Array,
): Uint32Array {
  const open = new Set(members);
  const order: number[] = [];
  const first = members.reduce((a, b) =>
    reads[a]! > reads[b]! || (reads[a] === reads[b] && a < b) ? a : b,
  );
  const path = [{ net: first, next: 0 }];
  open.delete(first);
  for (let top = path[0]; top !== undefined; top = path[path.length - 1]) {
    const source = sources.at(top.net, top.next++);
    if (source === -1) {
      order.push(top.net);
      path.pop();
    } else if (open.delete(source)) path.push({ net: source, next: 0 });
  }
  return Uint32Array.from(order);
}

/** How often each net is read: by gates, by pins of state elements, and by output ports. */
function readCounts(circuit: Circuit): Uint32Array {
  const { netCount, fanin, registers, latches, outputs } = circuit;
  const counts = new Uint32Array(netCount);
  const pins = [registers.clock, registers.data, registers.set, registers.reset];
  const latchPins = [latches.enable, latches.data, latches.set, latches.reset];
  const statePins = [...pins, ...latchPins, memoryPins(circuit)];
  for (const nets of [fanin, ...statePins, ...outputs.map((port) => port.nets)]) {
    for (const net of nets) if (net !== NO_NET) counts[net]!++;
  }
  return counts;
}

/** What a net depends on within one settling, one net after another. */
export class SettlingSources {
  readonly #circuit: Circuit;
  readonly #pins = new Map<number, number[]>();

  /** `delayed` as in `Loops`. */
  constructor(circuit: Circuit, delayed = loopsOf(circuit).delayed) {
    this.#circuit = circuit;
    const { registers, latches } = circuit;
    const cut = new Set<number>();
    for (let r = 0; r < registers.count; r++) {
      if (delayed[r] === 1) cut.add(registers.output[r]!);
      else this.#addPins(registers.output[r]!, [registers.set[r]!, registers.reset[r]!]);
    }
    const { enable, data, set, reset } = latches;
    for (let l = 0; l < latches.count; l++) {
      this.#addPins(latches.output[l]!, [enable[l]!, data[l]!, set[l]!, reset[l]!]);
    }
    eachSettler(circuit, (output, nets) => {
      if (!cut.has(output)) this.#addPins(output, nets);
    });
  }

  /** The i-th net that a net depends on, or -1 past the last. */
  at(net: number, i: number): number {
    const { kind, faninStart, fanin, tables } = this.#circuit;
    if (isGate(kind[net]!)) {
      const at = faninStart[net]! + i;
      if (at < faninStart[net + 1]!) return fanin[at]!;
      if (tables.count === 0) return -1;
      return this.#pins.get(net)?.[at - faninStart[net + 1]!] ?? -1;
    }
    if (kind[net] !== GateKind.Register && kind[net] !== GateKind.Latch) return -1;
    return this.#pins.get(net)?.[i] ?? -1;
  }

  #addPins(output: number, candidates: readonly number[]): void {
    const wired = candidates.filter((net) => net !== NO_NET);
    if (wired.length > 0) this.#pins.set(output, [...(this.#pins.get(output) ?? []), ...wired]);
  }
}
