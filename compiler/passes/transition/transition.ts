import type { Circuit } from '../../circuit/circuit.js';
import type { ClockPorts } from '../../circuit/clockPorts.js';
import {
  type ClockSchedule,
  type CycleShape,
  togetherSchedule,
} from '../../circuit/clockSchedule.js';
import { loopsOf } from '../../circuit/loops.js';
import { describeNets, placeOfNet } from '../../circuit/netPlaces.js';
import { pulsesOf } from '../../circuit/pulses.js';
import { ActiveTables } from '../../circuit/tables/activeTables.js';
import { waveLimit } from '../../circuit/waveLimit.js';
import { FALSE, type Literal, type Logic, type LogicFault } from '../../logic/logic.js';
import { LogicBuilder, type LogicOptions } from '../../logic/logicBuilder.js';
import { Prover } from '../../logic/prover.js';
import {
  type Algebra,
  mayBeOne,
  mayBeZero,
  type NetValue,
  threeValued,
  twoValued,
} from './algebra.js';
import { elementsByNet } from './elements.js';
import { heldLatches, heldRegister } from './heldValues.js';
import { LoopSet } from './loopSet.js';
import { MemoryLogic } from './memoryLogic.js';
import type { Moment } from './moment.js';
import { RowBits } from './rowBits.js';
import { Settled } from './settled.js';
import { StateBits } from './stateBits.js';
import { capture, type WaveRules, withInputs } from './waves.js';

/** How a circuit's cycle is turned into logic. */
export interface TransitionOptions extends LogicOptions {
  readonly threeValued?: boolean;
}

/**
 * Turns the clock cycles of a circuit into logic, one graph for each shape of cycle: registers and
 * latches are cut, and the steps of the cycle (inputs, sampling, clock edges) are followed
 * symbolically.
 *
 * With the clocks at known levels in each step, gating cells, latch pairs and dividers dissolve
 * into plain logic; where all registers sit on one edge of one clock, what is left is one settling
 * and one commit. The graphs share their nodes and state bits.
 */
export function transitions(
  circuit: Circuit,
  clocks: ClockPorts,
  schedule: ClockSchedule,
  options: TransitionOptions = {},
): Logic[] {
  const isThreeValued = options.threeValued ?? false;
  const logic = new LogicBuilder(options);
  const prover = new Prover(logic);
  const algebra = isThreeValued ? threeValued(logic, prover) : twoValued(logic, prover);
  const row = new RowBits(circuit, clocks, logic, isThreeValued, prover);
  const states = new StateBits(logic, isThreeValued, prover);
  const memories = new MemoryLogic(circuit, algebra, logic);
  const held = heldAtStart(circuit, states);
  const scene = { circuit, clocks, algebra, row, states, memories, held };
  const cycles = schedule.shapes.map((shape) => followCycle(scene, shape));
  const graphs = cycles.map(({ sampled, end, faults }) => ({
    outputs: isThreeValued ? splitUnknown(logic, sampled) : sampled,
    // Only now are all state bits known that any of the cycles needs.
    next: states.nextOf(heldElements(end), (bit) => row.value(bit)),
    writes: memories.carriedOut(end.moment.writes),
    faults,
  }));
  const columns = logic.take();
  return graphs.map((graph) => ({
    ...graph,
    nodeCount: columns.op.length,
    ...columns,
    inputCount: row.count,
    states: states.list,
    updates: [],
  }));
}

/** The cycle of a circuit whose clocks all tick together, see `transitions`. */
export const transition = (
  circuit: Circuit,
  clocks: ClockPorts,
  options: TransitionOptions = {},
): Logic => transitions(circuit, clocks, togetherSchedule(clocks), options)[0]!;

interface Scene {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
  readonly algebra: Algebra;
  readonly row: RowBits;
  readonly states: StateBits;
  readonly memories: MemoryLogic;
  /** What state elements hold when a cycle starts, in their order. */
  readonly held: readonly NetValue[];
}

interface CourseOfCycle {
  readonly sampled: readonly NetValue[];
  readonly end: Settled;
  readonly faults: readonly LogicFault[];
}

function followCycle(scene: Scene, shape: CycleShape): CourseOfCycle {
  const { circuit, algebra, row, states } = scene;
  const faults: LogicFault[] = [];
  const rules: WaveRules = {
    enabled: algebra.one,
    limit: waveLimit(circuit, algebra.hasUnknown),
    endless: (when, nets) => {
      const message = `registers move one another without end: ${describeNets(circuit, nets)}`;
      faults.push({ when, message, place: placeOfNet(circuit, nets[0]!) });
    },
  };
  const inputs = (active: readonly boolean[]): Moment['inputs'] =>
    inputValues(scene, active, (net) => row.value(row.bitOf(net)));
  const before = inputValues(scene, shape.start, (net) => states.previousInput(row.bitOf(net)));
  const start = atStart(scene, before, (when, nets, rounds) => {
    const what =
      rounds === undefined
        ? 'a loop does not settle'
        : `a loop does not settle in ${rounds} rounds, and only the reference engine makes more`;
    const message = `${what}: ${describeNets(circuit, nets)}`;
    faults.push({ when, message, place: placeOfNet(circuit, nets[0]!) });
  });
  const applied = withInputs(start, inputs(shape.start));
  let settled = capture(start, applied, { ...rules, enabled: states.started() });
  let sampled: NetValue[] = [];
  for (const step of shape.steps) {
    if (step.kind === 'sample') {
      const nets = circuit.outputs.flatMap((port) => Array.from(port.nets));
      sampled = nets.map((net) => settled.value(net));
    } else {
      settled = capture(settled, withInputs(settled, inputs(step.active)), rules);
    }
  }
  return { sampled, end: settled, faults };
}

// Clocks are constants at their levels; other inputs are what the row says.
function inputValues(
  { clocks, algebra }: Scene,
  active: readonly boolean[],
  data: Moment['inputs'],
): Moment['inputs'] {
  const levels = new Map<number, NetValue>();
  for (const [clock, { net, inactive }] of clocks.ports.entries()) {
    levels.set(net, (inactive === 1) !== active[clock] ? algebra.one : algebra.zero);
  }
  return (net) => levels.get(net) ?? data(net);
}

function heldAtStart(circuit: Circuit, states: StateBits): NetValue[] {
  const { registers, latches } = circuit;
  const count = registers.count + latches.count + loopsOf(circuit).keptNets.length;
  return Array.from({ length: count }, (_, element) => states.element(element));
}

// Where the cycle before ended: everything has settled, with the inputs it had.
function atStart(
  { circuit, algebra, memories, held }: Scene,
  inputs: Moment['inputs'],
  unsettled: Moment['unsettled'],
): Settled {
  const { registers, latches } = circuit;
  const elementCount = registers.count + latches.count;
  const kept = new Map<number, NetValue>();
  for (const [i, net] of loopsOf(circuit).keptNets.entries())
    kept.set(net, held[elementCount + i]!);
  return new Settled({
    circuit,
    algebra,
    elementOf: elementsByNet(circuit),
    tables: new ActiveTables(circuit, algebra.hasUnknown),
    pulses: pulsesOf(circuit),
    loops: new LoopSet(circuit),
    inputs,
    registers: Float64Array.from(held.slice(0, registers.count)),
    latches: Float64Array.from(held.slice(registers.count, elementCount)),
    memories,
    writes: [],
    kept: (net) => kept.get(net)!,
    unsettled,
  });
}

function heldElements(settled: Settled): NetValue[] {
  const { circuit } = settled.moment;
  const held: NetValue[] = [];
  for (let r = 0; r < circuit.registers.count; r++) held.push(heldRegister(settled, r));
  for (const latch of heldLatches(settled)) held.push(latch);
  for (const net of loopsOf(circuit).keptNets) held.push(settled.value(net));
  return held;
}

// The response row has the bits that are 1, padded to whole words, and then the bits that are x.
function splitUnknown(logic: LogicBuilder, values: readonly NetValue[]): Literal[] {
  const padding = new Array<Literal>((32 - (values.length % 32)) % 32).fill(FALSE);
  const ones = values.map((value) => logic.and(mayBeOne(value), mayBeZero(value) ^ 1));
  const unknown = values.map((value) => logic.and(mayBeOne(value), mayBeZero(value)));
  return [...ones, ...padding, ...unknown];
}
