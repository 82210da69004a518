import { type Circuit, Edge, Priority } from '../../../../compiler/circuit/circuit.js';
import { GateKind, gateInfo } from '../../../../compiler/circuit/gates.js';
import { type NetId, NO_NET } from '../../../../compiler/circuit/ids.js';
import type { Value } from '../../../../compiler/circuit/values.js';

/**
 * A plain three-valued simulation for tests: all gates again and again until nothing changes.
 *
 * Registers and latches start at their initial value, at x where there is none.
 */
export class Simulation {
  readonly #circuit: Circuit;
  readonly #nets: (name: string) => readonly NetId[];
  readonly #value: Uint8Array;
  #settled: Uint8Array;
  #changed = true;

  constructor(circuit: Circuit, nets: (name: string) => readonly NetId[]) {
    this.#circuit = circuit;
    this.#nets = nets;
    this.#value = new Uint8Array(circuit.netCount).fill(2);
    const { registers, latches } = circuit;
    for (const { output, initial, count } of [registers, latches]) {
      for (let i = 0; i < count; i++) this.#value[output[i]!] = initial[i]!;
    }
    this.#settleLevels();
    this.#settled = this.#value.slice();
  }

  /** Sets inputs to numbers or to bits with x, all at once. */
  set(inputs: Readonly<Record<string, number | bigint | string>>): void {
    for (const [name, value] of Object.entries(inputs)) {
      const nets = this.#nets(name);
      const text = typeof value === 'string' ? value : BigInt(value).toString(2);
      const bits = text.padStart(nets.length, '0');
      nets.forEach((net, i) => {
        const bit = bits[bits.length - 1 - i];
        this.#value[net] = bit === 'x' ? 2 : Number(bit);
      });
    }
    this.#settle();
  }

  /** Raises and lowers a clock. */
  tick(clock = 'clk'): void {
    this.set({ [clock]: 1 });
    this.set({ [clock]: 0 });
  }

  /** A signal's value as bits, leftmost first. */
  bits(name: string): string {
    return this.#nets(name)
      .map((net) => '01x'[this.#value[net]!])
      .reverse()
      .join('');
  }

  /** A signal's value as a number; NaN where a bit is x. */
  number(name: string): number {
    const bits = this.bits(name);
    return bits.includes('x') ? Number.NaN : Number(BigInt(`0b${bits}`));
  }

  #settle(): void {
    do {
      this.#changed = true;
      this.#settleLevels();
    } while (this.#clockRegisters());
  }

  // Data is what it was before the edge; a register that moves another's clock makes a new wave.
  #clockRegisters(): boolean {
    const { registers } = this.#circuit;
    const before = this.#settled;
    const next = new Map<number, number>();
    for (let i = 0; i < registers.count; i++) {
      const clock = registers.clock[i]!;
      const active = registers.edge[i] === Edge.Rising ? 1 : 0;
      if (before[clock] !== 1 - active || this.#value[clock] !== active) continue;
      next.set(registers.output[i]!, before[registers.data[i]!]!);
    }
    this.#settled = this.#value.slice();
    let changed = false;
    for (const [net, value] of next) {
      changed ||= this.#value[net] !== value;
      this.#value[net] = value;
    }
    return changed;
  }

  // Gates settle before a latch sees them: no latch passes what is only on the way.
  #settleLevels(): void {
    const { netCount, registers, latches } = this.#circuit;
    for (let round = 0; this.#changed; round++) {
      if (round > 2 * netCount + 10) throw new Error('the logic does not settle');
      this.#changed = false;
      for (let net = 0; net < netCount; net++) this.#gate(net);
      if (this.#changed) continue;
      for (let i = 0; i < latches.count; i++) this.#latch(i);
      for (let i = 0; i < registers.count; i++) this.#forced(registers, i);
    }
  }

  #put(net: number, value: number): void {
    if (this.#value[net] === value) return;
    this.#value[net] = value;
    this.#changed = true;
  }

  #latch(i: number): void {
    const { latches } = this.#circuit;
    if (this.#forced(latches, i) || latches.enable[i] === NO_NET) return;
    const enable = this.#value[latches.enable[i]!]!;
    const data = this.#value[latches.data[i]!]!;
    const old = this.#value[latches.output[i]!]!;
    if (enable === 1) this.#put(latches.output[i]!, data);
    else if (enable === 2 && data !== old) this.#put(latches.output[i]!, 2);
  }

  #forced(table: Circuit['registers'] | Circuit['latches'], i: number): boolean {
    const isOn = (net: number): boolean => net !== NO_NET && this.#value[net] === 1;
    const set = isOn(table.set[i]!);
    const reset = isOn(table.reset[i]!);
    if (!set && !reset) return false;
    const setWins = table.priority[i] === Priority.SetWins;
    this.#put(table.output[i]!, set && reset ? (setWins ? 1 : 0) : set ? 1 : 0);
    return true;
  }

  #gate(net: number): void {
    const { kind, faninStart, fanin } = this.#circuit;
    if (kind[net]! <= GateKind.Unknown) this.#put(net, kind[net]!);
    if (kind[net]! < GateKind.Buf) return;
    const inputs = Array.from(
      fanin.subarray(faninStart[net], faninStart[net + 1]),
      (source) => this.#value[source] as Value,
    );
    if (kind[net] === GateKind.Mux) {
      this.#put(net, mux(inputs[0]!, inputs[1]!, inputs[2]!));
      return;
    }
    const { operation, inverted } = gateInfo(kind[net]!).fold!;
    const value = inputs.reduce((a, b) => tables[operation](a, b));
    this.#put(net, value === 2 || !inverted ? value : 1 - value);
  }
}

const tables = {
  and: (a: Value, b: Value): Value => (a === 0 || b === 0 ? 0 : a === 1 && b === 1 ? 1 : 2),
  or: (a: Value, b: Value): Value => (a === 1 || b === 1 ? 1 : a === 0 && b === 0 ? 0 : 2),
  xor: (a: Value, b: Value): Value => (a === 2 || b === 2 ? 2 : a === b ? 0 : 1),
};

function mux(select: Value, zero: Value, one: Value): number {
  if (select !== 2) return select === 1 ? one : zero;
  return zero === one ? zero : 2;
}
