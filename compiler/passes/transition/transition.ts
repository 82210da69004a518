import type { Circuit } from '../../circuit/circuit.js';
import type { ClockPorts } from '../../circuit/clockPorts.js';
import { loopsOf } from '../../circuit/loops.js';
import { describeNets } from '../../circuit/netPlaces.js';
import { waveLimit } from '../../circuit/waveLimit.js';
import { FALSE, type Literal, type Logic } from '../../logic/logic.js';
import { LogicBuilder, type LogicOptions } from '../../logic/logicBuilder.js';
import {
  type Algebra,
  mayBeOne,
  mayBeZero,
  type NetValue,
  threeValued,
  twoValued,
} from './algebra.js';
import { elementsByNet } from './elements.js';
import { LoopSet } from './loopSet.js';
import { RowBits } from './rowBits.js';
import { type Moment, Settled } from './settled.js';
import { StateBits } from './stateBits.js';
import { capture, heldLatches, heldRegister, type WaveRules, withInputs } from './waves.js';

/** How a circuit's cycle is turned into logic. */
export interface TransitionOptions extends LogicOptions {
  readonly threeValued?: boolean;
}

/**
 * Turns one clock cycle of a circuit into logic: registers and latches are cut, and the phases of
 * the cycle (inputs, sampling, active edge, return) are followed symbolically.
 *
 * With the clock at a known level in each phase, gating cells, latch pairs and dividers dissolve
 * into plain logic; where all registers sit on one edge of one clock, what is left is one settling
 * and one commit.
 */
export function transition(
  circuit: Circuit,
  clocks: ClockPorts,
  options: TransitionOptions = {},
): Logic {
  const isThreeValued = options.threeValued ?? false;
  const logic = new LogicBuilder(options);
  const algebra = isThreeValued ? threeValued(logic) : twoValued(logic);
  const row = new RowBits(circuit, clocks, logic, isThreeValued);
  const states = new StateBits(logic, isThreeValued);
  const inactive = new Map<number, 0 | 1>(clocks.ports.map((port) => [port.net, port.inactive]));
  const inputs = (active: boolean) => (net: number) =>
    clockLevel(algebra, inactive.get(net), active) ?? row.value(row.bitOf(net));

  const faults: { when: Literal; message: string }[] = [];
  const before = (net: number): NetValue =>
    clockLevel(algebra, inactive.get(net), false) ?? states.previousInput(row.bitOf(net));
  const start = atStart(circuit, algebra, states, before, (when, nets) => {
    faults.push({ when, message: `a loop does not settle: ${describeNets(circuit, nets)}` });
  });
  const rules: WaveRules = {
    enabled: algebra.one,
    limit: waveLimit(circuit),
    endless: (when) => faults.push({ when, message: 'clock pins move one another without end' }),
  };
  const applied = withInputs(start, inputs(false));
  const settled = capture(start, applied, { ...rules, enabled: states.started() });
  const sampled = circuit.outputs.flatMap(({ nets }) =>
    Array.from(nets, (net) => settled.value(net)),
  );
  const active = capture(settled, withInputs(settled, inputs(true)), rules);
  const end = capture(active, withInputs(active, inputs(false)), rules);
  states.commit(heldElements(end), (bit) => row.value(bit));

  const outputs = isThreeValued ? splitUnknown(logic, sampled) : sampled;
  const columns = logic.take();
  return {
    nodeCount: columns.op.length,
    ...columns,
    inputCount: row.count,
    outputs,
    next: states.next,
    states: states.list,
    updates: [],
    faults,
  };
}

function clockLevel(
  algebra: Algebra,
  inactive: 0 | 1 | undefined,
  active: boolean,
): NetValue | undefined {
  if (inactive === undefined) return undefined;
  return (inactive === 1) !== active ? algebra.one : algebra.zero;
}

// Where the cycle before ended: everything has settled, with the inputs it had.
function atStart(
  circuit: Circuit,
  algebra: Algebra,
  states: StateBits,
  inputs: (net: number) => NetValue,
  unsettled: Moment['unsettled'],
): Settled {
  const { registers, latches } = circuit;
  const elementCount = registers.count + latches.count;
  const held = new Float64Array(elementCount);
  for (let e = 0; e < elementCount; e++) held[e] = states.element(e);
  const kept = new Map<number, NetValue>();
  for (const net of loopsOf(circuit).keptNets)
    kept.set(net, states.element(elementCount + kept.size));
  return new Settled({
    circuit,
    algebra,
    elementOf: elementsByNet(circuit),
    loops: new LoopSet(circuit),
    inputs,
    registers: held.subarray(0, registers.count),
    latches: held.subarray(registers.count),
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
