import { type Engine, RunFault, type RunPoint } from '../../../runtime/engine.js';
import { checkBefore, checkRun, checkState, lastRow } from '../../../runtime/engineArguments.js';
import { type ModelLayout, rowStride } from '../../../runtime/layout.js';
import type { Circuit } from '../../circuit/circuit.js';
import { Edge } from '../../circuit/circuit.js';
import type { ClockPorts } from '../../circuit/clockPorts.js';
import { type ClockSchedule, togetherSchedule } from '../../circuit/clockSchedule.js';
import { NO_NET } from '../../circuit/ids.js';
import { type ClockPins, clockPins } from '../../circuit/memoryPorts.js';
import { inputRowNets, outputRowNets, stateNets } from '../../circuit/modelLayout.js';
import { describeNets, placeOfNet } from '../../circuit/netPlaces.js';
import { powerUpState } from '../../circuit/powerUp.js';
import { initialMemory } from '../../circuit/powerUpMemory.js';
import { X } from '../../circuit/values.js';
import { waveDepths } from '../../circuit/waveDepths.js';
import { waveLimit } from '../../circuit/waveLimit.js';
import type { CapturedWrite } from './memories.js';
import { PulseWatch } from './pulseWatch.js';
import { Settler, UnsettledLoop } from './settler.js';
import { type Change, TableWatch } from './tableWatch.js';
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
 * where it equals the data, and x elsewhere. A pin that stays x may have moved in every wave up to the last that can move it. Where clock pins move one another beyond
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
  /** Per net on clock pins: its value when edges were last looked for. */
  readonly #seen: Uint8Array;
  readonly #initialMemory: Uint8Array;
  readonly #clockPins: ClockPins;
  readonly #clockNets: readonly number[];
  readonly #tableWatch: TableWatch;
  readonly #pulseWatch: PulseWatch;
  readonly #waveLimit: number;
  /** By the levels of all clocks. */
  readonly #lastWavesAt = new Map<string, ReadonlyMap<number, number>>();
  readonly #schedule: ClockSchedule;
  #position = 0;
  #started = false;
  #before: Uint32Array | undefined;

  constructor(circuit: Circuit, { layout, clocks, schedule }: ReferenceModel) {
    this.layout = layout;
    this.#circuit = circuit;
    this.#clocks = clocks.ports;
    this.#schedule = schedule ?? togetherSchedule(clocks);
    this.#settler = new Settler(circuit, layout.threeValued);
    this.#waveLimit = waveLimit(circuit, layout.threeValued);
    this.#inputs = inputRowNets(circuit, clocks);
    this.#outputs = outputRowNets(circuit);
    this.#state = stateNets(circuit);
    this.#seen = new Uint8Array(circuit.netCount);
    this.#initialMemory = initialMemory(circuit.memories, layout.threeValued);
    this.#clockPins = clockPins(circuit);
    this.#clockNets = clockedNets(this.#settler);
    this.#tableWatch = new TableWatch(circuit, this.#settler);
    this.#pulseWatch = new PulseWatch(circuit, this.#settler);
    this.reset(powerUpState(circuit, layout.threeValued ? 'unknown' : 'zero'));
  }

  reset(state: Uint8Array): void {
    checkState(this.layout, state);
    this.#settler.restart();
    this.#state.forEach((net, index) => {
      this.#settler.set(net, state[index]!);
    });
    this.#settler.memories.load(this.#initialMemory);
    this.#started = false;
    this.#position = 0;
    this.#before = undefined;
  }

  save(): RunPoint {
    const [state, memory] = [this.state(), this.memoryState()];
    return { state, memory, before: this.#before, position: this.#position };
  }

  restore({ state, memory, before, position }: RunPoint): void {
    checkBefore(this.layout, before);
    this.reset(state);
    this.loadMemory(memory);
    this.#position = position % this.#schedule.pattern.length;
    this.#before = before;
    if (before === undefined) return;
    // Between two cycles everything has settled, with the inputs of the one before.
    const { start } = this.#schedule.shapes[this.#schedule.pattern[this.#position]!]!;
    this.#applyInputs(before, 0, start);
  }

  state(): Uint8Array {
    return Uint8Array.from(this.#state, (net) => this.#settler.value[net]!);
  }

  memoryState(): Uint8Array {
    return this.#settler.memories.bytes();
  }

  loadMemory(bytes: Uint8Array): void {
    const settler = this.#settler;
    settler.memories.load(bytes);
    for (const memory of this.#circuit.memories.keys()) settler.touchMemory(memory);
    if (!this.#started) return;
    // Between two cycles everything has settled, and no clock pin moves by what is loaded.
    settler.settle();
    this.#forgetEdges();
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
      if (cycles > 0) this.#before = lastRow(this.layout, cycles, stimulus, stimulusStride);
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
    this.#forgetEdges();
    this.#establish();
    this.#started = true;
  }

  /** Takes the clock pins as they are now for what they were before. */
  #forgetEdges(): void {
    this.#settler.takeMovedClocks();
    for (const net of this.#clockNets) this.#seen[net] = this.#settler.value[net]!;
    this.#tableWatch.forget();
    this.#pulseWatch.forget();
  }

  /** Lets set and reset that act in waves do so, before there is any edge. */
  #establish(): void {
    for (let wave = 0; wave <= this.#waveLimit; wave++) {
      const endless = wave === this.#waveLimit && this.layout.threeValued;
      const changes = [...this.#pulseWatch.look(endless), ...this.#tableWatch.look(false, endless)];
      if (changes.length === 0) return;
      if (wave === this.#waveLimit && !endless) throw new UnsettledLoop(netsOf(changes));
      for (const { net, value } of changes) this.#settler.set(net, value);
      this.#settler.settle();
      if (endless) this.#pulseWatch.rest();
      this.#forgetEdges();
    }
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
      const unknown = this.#unknownClocks(wave);
      const moved = [...settler.takeMovedClocks(), ...unknown];
      const isLast = wave === this.#waveLimit;
      const { captured, writes } = this.#capture(
        moved,
        (net) => (wave === 0 ? settler.valueBefore(net) : settler.value[net]!),
        wave,
      );
      const events = this.#tableWatch.look(wave === 0, isLast && this.layout.threeValued);
      const acting = this.#pulseWatch.look(isLast && this.layout.threeValued);
      this.#pulseWatch.forget();
      captured.unshift(...acting);
      captured.push(...events);
      const written = settler.memories.apply(writes, isLast && this.layout.threeValued);
      for (const memory of written) settler.touchMemory(memory);
      // A pin that is x may move at any time: it is asked again with the data of after the change,
      // and after it has become x.
      const isAsked = moved.every((net) => settler.value[net] !== X || unknown.includes(net));
      const isStill = captured.length === 0 && written.size === 0;
      if (isStill && isAsked && (wave > 0 || unknown.length === 0)) return;
      if (isLast && !this.layout.threeValued) {
        throw new UnsettledLoop([...moved, ...netsOf(events), ...netsOf(acting)]);
      }
      for (const { net, value } of captured) settler.set(net, value);
      settler.settle();
    }
    this.#pulseWatch.rest();
    // What the last wave moved on its way to x is no edge.
    for (const net of settler.takeMovedClocks()) this.#seen[net] = settler.value[net]!;
    this.#tableWatch.forget();
    this.#pulseWatch.forget();
  }

  /**
   * Clock pins' nets that were x when edges were last looked for, and still are, unless nothing is
   * left that could have moved them.
   */
  #unknownClocks(wave: number): number[] {
    if (!this.layout.threeValued) return [];
    const { value } = this.#settler;
    const unknown = this.#clockNets.filter((net) => value[net] === X && this.#seen[net] === X);
    if (wave === 0 || unknown.length === 0) return unknown;
    const lastWaves = this.#lastWaves();
    return unknown.filter((net) => wave <= lastWaves.get(net)!);
  }

  // Per clock pin's net the last wave that can move it, with the clocks at their present levels.
  #lastWaves(): ReadonlyMap<number, number> {
    const { value } = this.#settler;
    const nets = this.#clocks.map(({ net }) => net);
    const key = nets.map((net) => value[net]).join('');
    let found = this.#lastWavesAt.get(key);
    if (found === undefined) {
      const ports = new Set<number>(nets);
      const level = (net: number) => (ports.has(net) ? (value[net] as 0 | 1) : undefined);
      const depths = waveDepths(this.#circuit, level);
      found = new Map(Array.from(depths, (depth, pin) => [this.#clockPins.clock[pin]!, depth]));
      this.#lastWavesAt.set(key, found);
    }
    return found;
  }

  #capture(
    movedClocks: readonly number[],
    dataOf: (net: number) => number,
    wave: number,
  ): { captured: Change[]; writes: CapturedWrite[] } {
    const isLast = wave === this.#waveLimit;
    const settler = this.#settler;
    const { registers } = this.#circuit;
    const { clockedStart, clocked } = settler.dependencies;
    const captured: Change[] = [];
    const writes: CapturedWrite[] = [];
    for (const clock of movedClocks) {
      const before = this.#seen[clock]!;
      const after = settler.value[clock]!;
      this.#seen[clock] = after;
      for (let i = clockedStart[clock]!; i < clockedStart[clock + 1]!; i++) {
        const register = clocked[i]!;
        const idle = this.#clockPins.edge[register] === Edge.Rising ? 0 : 1;
        // No edge where the pin comes from or goes to the wrong level.
        if (before === 1 - idle || after === idle) continue;
        const surely = before !== X && after !== X;
        if (register >= registers.count) {
          const port = register - registers.count;
          writes.push(settler.memories.capture(port, surely ? 1 : X, dataOf));
          continue;
        }
        const net = registers.output[register]!;
        const taken = dataOf(registers.data[register]!);
        const data = wave === 0 ? taken : this.#pulseWatch.guarded(register, taken);
        const held = surely ? data : merge(data, settler.value[net]!);
        const value = settler.evaluator.register(register, held);
        // A pin that stays x asks again until it has nothing more to say.
        if ((isLast || before === after) && value === settler.value[net]) continue;
        const endless = isLast && this.layout.threeValued;
        captured.push({ net, value: endless ? this.#pulseWatch.doubted(register) : value });
      }
    }
    return { captured, writes };
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

const netsOf = (changes: readonly Change[]): number[] => changes.map(({ net }) => net);

function clockedNets({ dependencies: { clockedStart } }: Settler): number[] {
  const nets: number[] = [];
  for (let net = 0; net + 1 < clockedStart.length; net++) {
    if (clockedStart[net]! < clockedStart[net + 1]!) nets.push(net);
  }
  return nets;
}

function bitOf(rows: Uint32Array, at: number, bit: number): number {
  return (rows[at + (bit >>> 5)]! >>> (bit & 31)) & 1;
}
