import { type Engine, RunFault } from '../../../runtime/engine.js';
import { checkRun, checkState } from '../../../runtime/engineArguments.js';
import { type ModelLayout, rowStride } from '../../../runtime/layout.js';
import type { Circuit } from '../../circuit/circuit.js';
import { Edge } from '../../circuit/circuit.js';
import type { ClockPorts } from '../../circuit/clockPorts.js';
import { type ClockSchedule, togetherSchedule } from '../../circuit/clockSchedule.js';
import { NO_NET } from '../../circuit/ids.js';
import { inputRowNets, outputRowNets, stateNets } from '../../circuit/modelLayout.js';
import { describeNets, placeOfNet } from '../../circuit/netPlaces.js';
import { powerUpState } from '../../circuit/powerUp.js';
import { X } from '../../circuit/values.js';
import { waveLimit } from '../../circuit/waveLimit.js';
import { Settler, UnsettledLoop } from './settler.js';
import { merge } from './values.js';

/** What `ReferenceEngine` needs beside the circuit: the rows, and which inputs tick. */
export interface ReferenceModel {
  readonly layout: ModelLayout;
  readonly clocks: ClockPorts;
  /** All clocks tick together unless given. */
  readonly schedule?: ClockSchedule;
}

/**
 * Runs a circuit as it was read, event by event: slow, simple, and without any pass of the compiler.
 *
 * A cycle has three phases: inputs are applied with the clocks inactive (then outputs are sampled),
 * the clocks become active, the clocks return. In each, the change settles; then registers whose
 * clock pin saw its edge capture, all at once, what their data had settled to before the phase.
 * Where that moves clock pins, those registers capture in a next wave the data as settled after the
 * wave before, which is the order that non-blocking assignments have in IEEE 1364. A set or reset
 * that is active when the edge comes wins over the capture. The first phase after `reset` only
 * establishes levels; a change from an unknown level before it is no edge.
 *
 * An edge that may have been one (0 to x, x to 1, x to x on a rising-edge pin) leaves the old value
 * where it equals the data, and x elsewhere. A pin that stays x may have moved in every wave. Where clock pins move one another beyond
 * `waveLimit`, a two-valued run is at fault; in a three-valued one, what would capture next is x.
 *
 * It starts with the power-up state `zero`, or `unknown` if three-valued. After a `RunFault` it
 * must be reset.
 */
export class ReferenceEngine implements Engine {
  readonly layout: ModelLayout;
  readonly #circuit: Circuit;
  readonly #clocks: ClockPorts['ports'];
  readonly #settler: Settler;
  readonly #inputs: Uint32Array;
  readonly #outputs: Uint32Array;
  readonly #state: Uint32Array;
  /** Per net that clocks registers: its value when edges were last looked for. */
  readonly #seen: Uint8Array;
  readonly #clockNets: readonly number[];
  readonly #waveLimit: number;
  readonly #schedule: ClockSchedule;
  #position = 0;
  #started = false;

  constructor(circuit: Circuit, { layout, clocks, schedule }: ReferenceModel) {
    this.layout = layout;
    this.#circuit = circuit;
    this.#clocks = clocks.ports;
    this.#schedule = schedule ?? togetherSchedule(clocks);
    this.#settler = new Settler(circuit, layout.threeValued);
    this.#waveLimit = waveLimit(circuit);
    this.#inputs = inputRowNets(circuit, clocks);
    this.#outputs = outputRowNets(circuit);
    this.#state = stateNets(circuit);
    this.#seen = new Uint8Array(circuit.netCount);
    this.#clockNets = [...new Set(circuit.registers.clock)];
    this.reset(powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero'));
  }

  reset(state: Uint8Array): void {
    checkState(this.layout, state);
    this.#settler.restart();
    this.#state.forEach((net, index) => {
      this.#settler.set(net, state[index]!);
    });
    this.#started = false;
    this.#position = 0;
  }

  state(): Uint8Array {
    return Uint8Array.from(this.#state, (net) => this.#settler.value[net]!);
  }

  run(
    cycles: number,
    stimulus: Uint32Array,
    stimulusStride: number,
    response: Uint32Array | undefined,
  ): void {
    checkRun(this.layout, cycles, stimulus, stimulusStride, response);
    const responseStride = rowStride(this.layout.outputs, this.layout.threeValued);
    let cycle = 0;
    try {
      for (; cycle < cycles; cycle++) {
        const { start, steps } = this.#schedule.shapes[this.#schedule.pattern[this.#position]!]!;
        this.#applyInputs(stimulus, cycle * stimulusStride, start);
        for (const step of steps) {
          if (step.kind === 'levels') this.#moveClocks(step.active);
          else if (response) this.#sample(response, cycle * responseStride);
        }
        this.#position = (this.#position + 1) % this.#schedule.pattern.length;
      }
    } catch (error) {
      if (!(error instanceof UnsettledLoop)) throw error;
      const nets = describeNets(this.#circuit, error.nets);
      throw new RunFault(cycle, {
        message: `the logic does not settle; these nets go on changing: ${nets}`,
        place: placeOfNet(this.#circuit, error.nets[0]!),
      });
    }
  }

  /** The present value of a net: 0, 1 or 2 for x. */
  valueOf(net: number): number {
    return this.#settler.value[net]!;
  }

  #applyInputs(rows: Uint32Array, at: number, clocks: readonly boolean[]): void {
    const settler = this.#settler;
    const { words } = this.layout.inputs;
    settler.startPeriod();
    for (let bit = 0; bit < this.#inputs.length; bit++) {
      const net = this.#inputs[bit]!;
      if (net === NO_NET) continue;
      const isOne = bitOf(rows, at, bit);
      const isX = this.layout.threeValued && bitOf(rows, at + words, bit);
      settler.set(net, isX ? X : isOne);
    }
    if (this.#started) {
      this.#settleAndCapture();
      return;
    }
    this.#setClocks(clocks);
    settler.settle();
    settler.takeMovedClocks();
    for (const net of this.#circuit.registers.clock) this.#seen[net] = settler.value[net]!;
    this.#started = true;
  }

  #moveClocks(active: readonly boolean[]): void {
    this.#settler.startPeriod();
    this.#setClocks(active);
    this.#settleAndCapture();
  }

  #setClocks(active: readonly boolean[]): void {
    for (const [clock, { net, inactive }] of this.#clocks.entries()) {
      this.#settler.set(net, active[clock] ? 1 - inactive : inactive);
    }
  }

  #settleAndCapture(): void {
    const settler = this.#settler;
    settler.settle();
    for (let wave = 0; wave <= this.#waveLimit; wave++) {
      const unknown = this.#unknownClocks();
      const moved = [...settler.takeMovedClocks(), ...unknown];
      const isLast = wave === this.#waveLimit;
      const captured = this.#capture(
        moved,
        (net) => (wave === 0 ? settler.valueBefore(net) : settler.value[net]!),
        isLast,
      );
      // A pin that is x may move at any time: it is asked again with the data of after the change,
      // and after it has become x.
      const isAsked = moved.every((net) => settler.value[net] !== X || unknown.includes(net));
      if (captured.length === 0 && isAsked && (wave > 0 || unknown.length === 0)) return;
      if (isLast && !this.layout.threeValued) throw new UnsettledLoop(moved);
      for (const { net, value } of captured) settler.set(net, value);
      settler.settle();
    }
    // What the last wave moved on its way to x is no edge.
    for (const net of settler.takeMovedClocks()) this.#seen[net] = settler.value[net]!;
  }

  /** Clock pins' nets that were x when edges were last looked for, and still are. */
  #unknownClocks(): number[] {
    if (!this.layout.threeValued) return [];
    const { value } = this.#settler;
    return this.#clockNets.filter((net) => value[net] === X && this.#seen[net] === X);
  }

  #capture(
    movedClocks: readonly number[],
    dataOf: (net: number) => number,
    isLast: boolean,
  ): { net: number; value: number }[] {
    const settler = this.#settler;
    const { registers } = this.#circuit;
    const { clockedStart, clocked } = settler.dependencies;
    const captured: { net: number; value: number }[] = [];
    for (const clock of movedClocks) {
      const before = this.#seen[clock]!;
      const after = settler.value[clock]!;
      this.#seen[clock] = after;
      for (let i = clockedStart[clock]!; i < clockedStart[clock + 1]!; i++) {
        const register = clocked[i]!;
        const idle = registers.edge[register] === Edge.Rising ? 0 : 1;
        // No edge where the pin comes from or goes to the wrong level.
        if (before === 1 - idle || after === idle) continue;
        const net = registers.output[register]!;
        const data = dataOf(registers.data[register]!);
        const surely = before !== X && after !== X;
        const held = surely ? data : merge(data, settler.value[net]!);
        const value = settler.evaluator.register(register, held);
        // A pin that stays x asks again until it has nothing more to say.
        if ((isLast || before === after) && value === settler.value[net]) continue;
        const endless = isLast && this.layout.threeValued;
        captured.push({ net, value: endless ? settler.evaluator.register(register, X) : value });
      }
    }
    return captured;
  }

  #sample(response: Uint32Array, at: number): void {
    const { words } = this.layout.outputs;
    response.fill(0, at, at + rowStride(this.layout.outputs, this.layout.threeValued));
    for (let bit = 0; bit < this.#outputs.length; bit++) {
      const value = this.#settler.value[this.#outputs[bit]!]!;
      if (value === 0) continue;
      const word = at + (bit >>> 5) + (value === X ? words : 0);
      response[word]! |= 1 << (bit & 31);
    }
  }
}

function bitOf(rows: Uint32Array, at: number, bit: number): number {
  return (rows[at + (bit >>> 5)]! >>> (bit & 31)) & 1;
}
