import { GateKind, gateInfo } from '../../circuit/gates.js';
import { NO_NET } from '../../circuit/ids.js';
import { type NetValue, NO_VALUE } from './algebra.js';
import { driverValue } from './driver.js';
import type { Moment, SettledMoment } from './moment.js';
import { settleLoop } from './settleLoop.js';

const OPEN = -2;

/**
 * The values of all nets once the logic has settled, each computed when it is first asked for.
 *
 * Works with an explicit stack: the depth of the netlist costs no recursion. Where a constant
 * decides (a closed latch, a gate with a controlling value), the other fan-in is not looked at.
 */
export class Settled implements SettledMoment {
  readonly moment: Moment;
  readonly #value: Float64Array;
  readonly #stack: number[] = [];
  readonly #progress: number[] = [];

  constructor(moment: Moment) {
    this.moment = moment;
    this.#value = new Float64Array(moment.circuit.netCount).fill(NO_VALUE);
  }

  /** The settled value of a net. */
  value(net: number): NetValue {
    if (this.#value[net]! >= 0) return this.#value[net]!;
    this.#open(net);
    while (this.#stack.length > 0) {
      const wanted = this.#step(this.#stack[this.#stack.length - 1]!);
      if (wanted === NO_NET) {
        this.#stack.pop();
        this.#progress.pop();
      } else {
        if (this.#value[wanted] === OPEN) throw new Error(`net ${wanted} is in an unknown loop`);
        this.#open(wanted);
      }
    }
    return this.#value[net]!;
  }

  /** What a register or latch holds in this moment, before its pins act. */
  held(net: number): NetValue {
    const { circuit, elementOf, registers, latches } = this.moment;
    const holders = circuit.kind[net] === GateKind.Register ? registers : latches;
    return holders[elementOf[net]!]!;
  }

  #open(net: number): void {
    this.#value[net] = OPEN;
    this.#stack.push(net);
    this.#progress.push(0);
  }

  // Computes a net, or names the next net that must be known before.
  #step(net: number): number {
    const { circuit, algebra, elementOf, pulses, inputs, loops, kept } = this.moment;
    const kind = circuit.kind[net];
    if (kind === GateKind.Zero) return this.#close(net, algebra.zero);
    if (kind === GateKind.One) return this.#close(net, algebra.one);
    if (kind === GateKind.Unknown) return this.#close(net, algebra.unknown);
    if (kind === GateKind.Input) return this.#close(net, inputs(net));
    const isElement = kind === GateKind.Register || kind === GateKind.Latch;
    if (kept !== undefined) {
      if (isElement) return this.#close(net, this.held(net));
      if (loops.isKept(net)) return this.#close(net, kept(net));
    } else if (loops.loopOf(net) >= 0) {
      return this.#stepLoop(loops.loopOf(net));
    }
    if (kind === GateKind.Register && pulses.isDelayed[elementOf[net]!] === 1) {
      return this.#close(net, this.held(net));
    }
    const entry = this.moment.tables.of(net);
    if (entry >= 0) return this.#stepTable(net, entry, isElement);
    if (isElement) return this.#stepElement(net, kind === GateKind.Register);
    if (kind === GateKind.MemoryRead) return this.#stepRead(net);
    return kind === GateKind.Mux ? this.#stepMux(net) : this.#stepFold(net);
  }

  #close(net: number, value: NetValue): number {
    this.#value[net] = value;
    return NO_NET;
  }

  #compute(net: number, held: NetValue): number {
    return this.#close(net, driverValue(this.moment, net, this.#known, held));
  }

  readonly #known = (net: number): NetValue => this.#value[net]!;

  #isKnown(net: number): boolean {
    return net === NO_NET || this.#value[net]! >= 0;
  }

  #stepTable(net: number, entry: number, isElement: boolean): number {
    const { tables } = this.moment;
    const nets = tables.form(entry).settlers.map((place) => tables.input(entry, place));
    for (const each of nets) if (!this.#isKnown(each)) return each;
    if (!isElement) return this.#compute(net, NO_VALUE);
    const held = this.held(net);
    return this.#unchanged(net, held, nets) ? this.#close(net, held) : this.#compute(net, held);
  }

  #stepElement(net: number, isRegister: boolean): number {
    const { circuit, algebra, elementOf } = this.moment;
    const { set, reset } = isRegister ? circuit.registers : circuit.latches;
    const element = elementOf[net]!;
    const enable = isRegister ? NO_NET : circuit.latches.enable[element]!;
    const controls = [set[element]!, reset[element]!, enable];
    for (const control of controls) if (!this.#isKnown(control)) return control;
    const held = this.held(net);
    const isClosed = enable === NO_NET || this.#value[enable] === algebra.zero;
    // Controls that have acted on this value act no further: logic must not grow by each wave.
    if (isClosed && this.#unchanged(net, held, controls)) return this.#close(net, held);
    const data = isClosed ? NO_NET : circuit.latches.data[element]!;
    return this.#isKnown(data) ? this.#compute(net, held) : data;
  }

  #unchanged(net: number, held: NetValue, controls: readonly number[]): boolean {
    const { before } = this.moment;
    // At the first cycle's start no control has acted yet on the power-up state.
    if (before === undefined || before.moment.kept !== undefined) return false;
    if (before.value(net) !== held) return false;
    return controls.every((pin) => pin === NO_NET || before.value(pin) === this.#value[pin]);
  }

  #stepMux(net: number): number {
    const { circuit, algebra } = this.moment;
    const at = circuit.faninStart[net]!;
    const select = circuit.fanin[at]!;
    if (!this.#isKnown(select)) return select;
    const zero = circuit.fanin[at + 1]!;
    const one = circuit.fanin[at + 2]!;
    if (this.#value[select] !== algebra.one && !this.#isKnown(zero)) return zero;
    if (this.#value[select] !== algebra.zero && !this.#isKnown(one)) return one;
    return this.#compute(net, NO_VALUE);
  }

  #stepRead(net: number): number {
    const { faninStart, fanin } = this.moment.circuit;
    const level = this.#stack.length - 1;
    const start = faninStart[net]!;
    for (let i = start + this.#progress[level]!; i < faninStart[net + 1]!; i++) {
      if (this.#isKnown(fanin[i]!)) continue;
      this.#progress[level] = i - start;
      return fanin[i]!;
    }
    return this.#compute(net, NO_VALUE);
  }

  #stepFold(net: number): number {
    const { circuit, algebra } = this.moment;
    const { operation, inverted } = gateInfo(circuit.kind[net]!).fold!;
    const start = circuit.faninStart[net]!;
    const end = circuit.faninStart[net + 1]!;
    const controlling =
      operation === 'and' ? algebra.zero : operation === 'or' ? algebra.one : NO_VALUE;
    const level = this.#stack.length - 1;
    for (let i = start + this.#progress[level]!; i < end; i++) {
      const source = circuit.fanin[i]!;
      if (!this.#isKnown(source)) {
        this.#progress[level] = i - start;
        return source;
      }
      if (this.#value[source] === controlling) {
        return this.#close(net, inverted ? algebra.not(controlling) : controlling);
      }
    }
    return this.#compute(net, NO_VALUE);
  }

  // All of a loop's nets are computed together, once everything they read from outside is known.
  #stepLoop(loop: number): number {
    const { loops } = this.moment;
    const outside = loops.outside(loop);
    const level = this.#stack.length - 1;
    for (let i = this.#progress[level]!; i < outside.length; i++) {
      if (this.#isKnown(outside[i]!)) continue;
      this.#progress[level] = i;
      return outside[i]!;
    }
    const values = settleLoop(this, loop, this.#known);
    loops.nets(loop).forEach((net, i) => {
      this.#value[net] = values[i]!;
    });
    return NO_NET;
  }
}
