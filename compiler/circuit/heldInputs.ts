import type { Circuit } from './circuit.js';
import { Priority } from './circuit.js';
import { GateKind, gateInfo } from './gates.js';
import { GrowableUint32 } from './growable.js';
import { NO_NET } from './ids.js';
import { Lists } from './lists.js';
import { gateReaders, type Readers } from './readers.js';
import { X } from './values.js';

/** Value of a net that moves with a clock. */
export const TICKS = 3;

/**
 * What becomes known for good where inputs are held while the clocks tick and everything else is
 * unknown, registers among it.
 *
 * Values of 0, 1 and x only ever go from x to 0 or 1, so that each gate and register settles once
 * (ternary simulation, Eichelberger 1965). What a net becomes is handed on to its readers alone,
 * and taken back by `release`.
 */
export class HeldInputs {
  readonly #circuit: Circuit;
  readonly #gates: Readers;
  readonly #elements: Readers;
  readonly #value: Uint8Array;
  /** Nets that have a value, in the order in which they got it. */
  readonly #known = new GrowableUint32();
  /** Fan-in nets looked at so far. */
  work = 0;

  /** `clocks` are the nets that tick. */
  constructor(circuit: Circuit, clocks: readonly number[]) {
    this.#circuit = circuit;
    this.#gates = gateReaders(circuit);
    this.#elements = elementReaders(circuit);
    this.#value = new Uint8Array(circuit.netCount).fill(X);
    for (const clock of clocks) this.#set(clock, TICKS);
    for (let net = 0; net < circuit.netCount; net++) {
      if (circuit.kind[net]! <= GateKind.One) this.#set(net, circuit.kind[net]!);
    }
    this.#settle(0);
  }

  /** How many nets are known. */
  get count(): number {
    return this.#known.length;
  }

  /** 0 or 1, 2 where a net is not known, `TICKS` where it moves with a clock. */
  valueOf(net: number): number {
    return this.#value[net]!;
  }

  /** The nets that became known after the first `since`. */
  *knownSince(since: number): Iterable<number> {
    for (let i = since; i < this.#known.length; i++) yield this.#known.get(i);
  }

  /** Holds an input at a level, unless it is known. */
  hold(input: number, level: number): void {
    if (this.#value[input] !== X) return;
    const from = this.#known.length;
    this.#set(input, level);
    this.#settle(from);
  }

  /** Forgets all but the first `count` nets that became known. */
  release(count: number): void {
    for (let i = count; i < this.#known.length; i++) this.#value[this.#known.get(i)] = X;
    this.#known.cut(count);
  }

  #set(net: number, value: number): void {
    this.#value[net] = value;
    this.#known.push(net);
  }

  #settle(from: number): void {
    const value = this.#value;
    const { registers } = this.#circuit;
    const { start: gateStart, reader: gate } = this.#gates;
    const { start: elementStart, reader: element } = this.#elements;
    for (let next = from; next < this.#known.length; next++) {
      const net = this.#known.get(next);
      for (let i = gateStart[net]!; i < gateStart[net + 1]!; i++) {
        const output = gate[i]!;
        if (value[output] !== X) continue;
        const result = this.#gate(output);
        if (result !== X) this.#set(output, result);
      }
      for (let i = elementStart[net]!; i < elementStart[net + 1]!; i++) {
        const number = element[i]!;
        const isLatch = number >= registers.count;
        const { output } = isLatch ? this.#circuit.latches : registers;
        const own = output[isLatch ? number - registers.count : number]!;
        if (value[own] !== X) continue;
        const result = isLatch ? this.#latch(number - registers.count) : this.#register(number);
        if (result !== X) this.#set(own, result);
      }
    }
  }

  #register(r: number): number {
    const { registers } = this.#circuit;
    const captures = this.#value[registers.clock[r]!] === TICKS;
    const captured = captures ? this.#levelOf(registers.data[r]!) : X;
    return this.#withSetReset(captured, registers, r);
  }

  #latch(l: number): number {
    const { latches } = this.#circuit;
    const enable = latches.enable[l]!;
    const level = enable === NO_NET ? 0 : this.#value[enable]!;
    const passes = level === 1 || level === TICKS;
    return this.#withSetReset(passes ? this.#levelOf(latches.data[l]!) : X, latches, l);
  }

  #withSetReset(
    captured: number,
    pins: Pick<Circuit['registers'], 'set' | 'reset' | 'priority'>,
    at: number,
  ): number {
    const set = this.#pin(pins.set[at]!);
    const reset = this.#pin(pins.reset[at]!);
    if (set === 0 && reset === 0) return captured;
    const priority = pins.priority[at]!;
    if (set === 1 && (reset === 0 || priority === Priority.SetWins)) return 1;
    if (reset === 1 && (set === 0 || priority === Priority.ResetWins)) return 0;
    if (set === X && reset === 0 && captured === 1) return 1;
    return reset === X && set === 0 && captured === 0 ? 0 : X;
  }

  #pin(net: number): number {
    return net === NO_NET ? 0 : this.#levelOf(net);
  }

  // Data that moves with a clock is taken as unknown.
  #levelOf(net: number): number {
    const value = this.#value[net]!;
    return value === TICKS ? X : value;
  }

  #gate(net: number): number {
    const { kind, faninStart, fanin } = this.#circuit;
    const start = faninStart[net]!;
    const end = faninStart[net + 1]!;
    this.work += end - start;
    if (kind[net] === GateKind.Mux)
      return this.#mux(fanin[start]!, fanin[start + 1]!, fanin[start + 2]!);
    const { fold, role } = gateInfo(kind[net]!);
    if (fold === undefined || role !== 'gate' || kind[net] === GateKind.CaseEqual) return X;
    const result = this.#folded(start, end, fold.operation);
    return fold.inverted && result <= 1 ? 1 - result : result;
  }

  // Two nets that tick may be of different clocks.
  #folded(start: number, end: number, operation: 'and' | 'or' | 'xor'): number {
    const decides = operation === 'and' ? 0 : operation === 'or' ? 1 : -1;
    let unknown = 0;
    let ticking = 0;
    let ones = 0;
    for (let i = start; i < end; i++) {
      const value = this.#value[this.#circuit.fanin[i]!]!;
      if (value === decides) return value;
      if (value === X) unknown++;
      else if (value === TICKS) ticking++;
      else ones += value;
    }
    if (unknown > 0 || ticking > 1) return X;
    if (ticking === 1) return TICKS;
    return operation === 'xor' ? ones & 1 : 1 - decides;
  }

  #mux(select: number, zero: number, one: number): number {
    const chosen = this.#value[select]!;
    const ifZero = this.#value[zero]!;
    const ifOne = this.#value[one]!;
    if (chosen <= 1) return chosen === 1 ? ifOne : ifZero;
    if (ifZero > 1 || ifOne > 1) return X;
    if (ifZero === ifOne) return ifZero;
    return chosen;
  }
}

/** The registers, and behind them the latches, that have a pin at each net. */
function elementReaders({ netCount, registers, latches }: Circuit): Readers {
  const pins = [
    ...[registers.clock, registers.data, registers.set, registers.reset].map(
      (nets) => [0, nets] as const,
    ),
    ...[latches.enable, latches.data, latches.set, latches.reset].map(
      (nets) => [registers.count, nets] as const,
    ),
  ];
  const { start, members: reader } = new Lists(netCount, (add) => {
    for (const [first, nets] of pins) {
      nets.forEach((net, i) => {
        if (net !== NO_NET) add(net, first + i);
      });
    }
  });
  return { start, reader };
}
