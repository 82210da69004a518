import type { Circuit } from './circuit.js';
import { GateKind, gateInfo } from './gates.js';
import { NO_NET } from './ids.js';
import { loopsOf } from './loops.js';
import { clockPins, memoryReads, memoryWrites } from './memoryPorts.js';
import { TarjanSearch } from './tarjan.js';

/** The level of a net that a phase of a cycle holds at 0 or 1 (a clock), undefined for others. */
export type PhaseLevel = (net: number) => 0 | 1 | undefined;

/**
 * Per clock pin (in the order of `clockPins`), the last wave of a phase in which it can move:
 * 0 where only inputs and clocks move it, 1 where it also follows registers that capture in wave 0,
 * and so on; infinity where registers clock themselves.
 *
 * Goes by the structure and by what the levels of the clocks decide (a closed latch passes
 * nothing), never by other values. A pin that is x does not move beyond its last wave, though its
 * value alone does not tell so.
 */
export function waveDepths(circuit: Circuit, levels: PhaseLevel): Float64Array {
  const depths = new WaveDepths(circuit, levels);
  return Float64Array.from(clockPins(circuit).clock, (pin) => depths.lastChange(pin) + 1);
}

/** A net that changes another: at once, or one wave later, since it acts as a clock there. */
interface Mover {
  readonly net: number;
  readonly isClock: boolean;
}

const NEVER = -1;

class WaveDepths {
  readonly #circuit: Circuit;
  readonly #level: Int8Array;
  readonly #elementOf: Uint32Array;
  readonly #tableOf: Map<number, number>;
  readonly #writeClocks: readonly number[][];
  readonly #delayed: Uint8Array;
  /** Per net the last wave whose captures can change it; NaN where that is not known yet. */
  readonly #last: Float64Array;

  constructor(circuit: Circuit, levels: PhaseLevel) {
    this.#circuit = circuit;
    this.#elementOf = new Uint32Array(circuit.netCount);
    for (const { output } of [circuit.registers, circuit.latches]) {
      for (const [element, net] of output.entries()) this.#elementOf[net] = element;
    }
    const { tables, memories } = circuit;
    this.#tableOf = new Map(Array.from(tables.output, (net, entry) => [net, entry]));
    this.#writeClocks = memories.map(() => []);
    for (const { memory, port } of memoryWrites(circuit)) {
      this.#writeClocks[memory]!.push(port.clock);
    }
    this.#level = levelsOf(circuit, levels);
    this.#delayed = loopsOf(circuit).delayed;
    this.#last = new Float64Array(circuit.netCount).fill(Number.NaN);
    this.#markCircles();
  }

  /** The last wave whose captures can change a net; -1 where none can. */
  lastChange(root: number): number {
    const stack = [root];
    for (let net = stack.at(-1); net !== undefined; net = stack.at(-1)) {
      const open = this.#evaluate(net);
      if (open.length === 0) stack.pop();
      else stack.push(...open);
    }
    return this.#last[root]!;
  }

  // Sets what is known of a net, or names the nets to look at before.
  #evaluate(net: number): number[] {
    if (!Number.isNaN(this.#last[net]!)) return [];
    const movers = this.#moversOf(net);
    const open = movers.filter((mover) => Number.isNaN(this.#last[mover.net]!));
    if (open.length > 0) return open.map((mover) => mover.net);
    let last = NEVER;
    for (const { net: from, isClock } of movers) {
      last = Math.max(last, this.#last[from]! + Number(isClock));
    }
    this.#last[net] = last;
    return [];
  }

  // Nets that follow themselves: over a clock pin without end; otherwise they change with what
  // enters the circle, which is looked for from all of them together.
  #markCircles(): void {
    const movers: (readonly Mover[] | undefined)[] = [];
    const of = (net: number): readonly Mover[] => {
      movers[net] ??= this.#moversOf(net);
      return movers[net];
    };
    const search = new TarjanSearch(this.#circuit.netCount, (net, i) => of(net)[i]?.net ?? -1);
    for (const circle of search.components()) {
      const members = new Set(circle);
      const inner = circle.flatMap((net) => of(net).filter((mover) => members.has(mover.net)));
      if (inner.some(({ isClock }) => isClock)) {
        for (const net of circle) this.#last[net] = Number.POSITIVE_INFINITY;
        continue;
      }
      // Components come behind those that they read, so that what enters is known to end.
      const outer = circle.flatMap((net) => of(net).filter((mover) => !members.has(mover.net)));
      let last = NEVER;
      for (const { net, isClock } of outer) {
        last = Math.max(last, this.lastChange(net) + Number(isClock));
      }
      for (const net of circle) this.#last[net] = last;
    }
  }

  #moversOf(net: number): Mover[] {
    if (this.#level[net]! >= 0) return [];
    const table = this.#tableOf.get(net);
    if (table !== undefined) return this.#tableMovers(table);
    const { circuit, element } = { circuit: this.#circuit, element: this.#elementOf[net]! };
    switch (circuit.kind[net]) {
      case GateKind.Register: {
        const { clock, set, reset } = circuit.registers;
        // Where a register sets or resets itself, that takes a wave of its own.
        const isClock = this.#delayed[element] === 1;
        const controls = this.#open([set[element]!, reset[element]!]);
        const edges = [{ net: clock[element]!, isClock: true }];
        return [...controls.map(({ net }) => ({ net, isClock })), ...edges];
      }
      case GateKind.Latch: {
        const { enable, data, set, reset } = circuit.latches;
        const isClosed = enable[element] === NO_NET || this.#level[enable[element]!] === 0;
        const passing = isClosed ? [] : [enable[element]!, data[element]!];
        return this.#open([set[element]!, reset[element]!, ...passing]);
      }
      case GateKind.Mux:
        return this.#open(this.#chosen(net));
      case GateKind.MemoryRead: {
        const { ports, portOf } = memoryReads(circuit);
        const clocks = this.#writeClocks[ports[portOf[net]!]!.memory]!;
        const written = clocks.map((clock) => ({ net: clock, isClock: true }));
        return [...this.#open(this.#fanin(net)), ...written];
      }
      default:
        return this.#open(this.#fanin(net));
    }
  }

  // A cell that goes by a table may look for edges at any of its inputs.
  #tableMovers(entry: number): Mover[] {
    const { inputStart, input } = this.#circuit.tables;
    const inputs = input.subarray(inputStart[entry]!, inputStart[entry + 1]!);
    return Array.from(inputs, (net) => ({ net, isClock: true }));
  }

  #fanin(net: number): number[] {
    const { faninStart, fanin } = this.#circuit;
    return [...fanin.subarray(faninStart[net]!, faninStart[net + 1]!)];
  }

  #chosen(net: number): number[] {
    const [select, zero, one] = this.#fanin(net) as [number, number, number];
    const level = this.#level[select]!;
    return level < 0 ? [select, zero, one] : [level === 0 ? zero : one];
  }

  // Nets at a fixed level move nothing.
  #open(nets: readonly number[]): Mover[] {
    return nets
      .filter((net) => net !== NO_NET && this.#level[net]! < 0)
      .map((net) => ({ net, isClock: false }));
  }
}

/** Per net the level that the clocks alone give it, -1 where they do not decide. */
function levelsOf(circuit: Circuit, levels: PhaseLevel): Int8Array {
  const level = new Int8Array(circuit.netCount).fill(UNSEEN);
  const stack: number[] = [];
  for (let root = 0; root < circuit.netCount; root++) {
    if (level[root] !== UNSEEN) continue;
    stack.push(root);
    for (let net = stack.at(-1); net !== undefined; net = stack.at(-1)) {
      const wanted = decide(circuit, levels, level, net);
      if (wanted === NO_NET) stack.pop();
      else stack.push(wanted);
    }
  }
  return level;
}

const UNDECIDED = -1;
const UNSEEN = -2;
/** Looked at further up: a circle decides nothing. */
const OPEN = -3;

// Sets a net's level, or names a net that must be looked at before.
function decide(circuit: Circuit, levels: PhaseLevel, level: Int8Array, net: number): number {
  if (level[net] !== UNSEEN && level[net] !== OPEN) return NO_NET;
  const kind = circuit.kind[net]!;
  if (kind === GateKind.Zero || kind === GateKind.One) {
    level[net] = Number(kind === GateKind.One);
    return NO_NET;
  }
  if (kind === GateKind.Input) level[net] = levels(net) ?? UNDECIDED;
  else if (kind < GateKind.Buf || kind === GateKind.MemoryRead) level[net] = UNDECIDED;
  else {
    level[net] = OPEN;
    const start = circuit.faninStart[net]!;
    for (let i = start; i < circuit.faninStart[net + 1]!; i++) {
      if (level[circuit.fanin[i]!] === UNSEEN) return circuit.fanin[i]!;
    }
    level[net] = gateLevel(circuit, level, net);
  }
  return NO_NET;
}

function gateLevel(circuit: Circuit, level: Int8Array, net: number): number {
  const start = circuit.faninStart[net]!;
  const fanin = circuit.fanin.subarray(start, circuit.faninStart[net + 1]!);
  const of = (source: number): number => Math.max(level[source]!, UNDECIDED);
  const { fold } = gateInfo(circuit.kind[net]!);
  if (fold === undefined) {
    const select = of(fanin[0]!);
    if (select === UNDECIDED) return UNDECIDED;
    return of(fanin[1 + select]!);
  }
  const { operation, inverted } = fold;
  const controlling = operation === 'and' ? 0 : operation === 'or' ? 1 : UNSEEN;
  let value = operation === 'and' ? 1 : 0;
  let isDecided = true;
  for (const source of fanin) {
    const own = of(source);
    if (own === controlling) return controlling ^ Number(inverted);
    if (own === UNDECIDED) isDecided = false;
    else if (operation === 'xor') value ^= own;
  }
  return isDecided ? value ^ Number(inverted) : UNDECIDED;
}
