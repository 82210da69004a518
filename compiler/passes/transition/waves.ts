import { Edge } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import type { Algebra, NetValue } from './algebra.js';
import { driverValue } from './driver.js';
import type { Moment } from './moment.js';
import { Settled } from './settled.js';

/** What the waves of one phase depend on. */
export interface WaveRules {
  /** Nothing is captured where this is 0. */
  readonly enabled: NetValue;
  /** Most waves in one phase, see `waveLimit`. */
  readonly limit: number;
  /** Takes what is 1 where a clock pin still moves after the last wave. */
  readonly endless: (stillMoves: NetValue) => void;
}

/**
 * Lets registers capture until no clock pin moves.
 *
 * `before` and `first` are the settled logic before and after inputs or clocks changed. Registers
 * whose clock pin saw its edge in between capture what their data had settled to in `before`, all
 * at once; if that moves other clock pins, those registers capture in a next wave the data as
 * settled after the wave before, as non-blocking assignments of IEEE 1364-2005 (11.4) would.
 * Returns the logic settled after the last wave. Where pins still move then, two-valued logic is at
 * fault; with three values, what may yet be captured is x.
 */
export function capture(before: Settled, first: Settled, rules: WaveRules): Settled {
  const { algebra } = first.moment;
  let from = before;
  let to = first;
  let data = before;
  const captures = new Captures();
  for (let wave = 0; ; wave++) {
    const { fires, areAsked } = firing(from, to, rules.enabled);
    if (fires.size === 0 && areAsked) return to;
    const isLast = wave === rules.limit;
    if (isLast && !algebra.hasUnknown) {
      rules.endless([...fires.values()].reduce((any, each) => algebra.or(any, each)));
      return to;
    }
    const registers = captures.wave(to, data, fires, isLast);
    // A pin that is x may move at any time: it is asked again with the data of after the change,
    // and after it has become x.
    const isStill = registers.every((held, r) => held === heldRegister(to, r));
    if (isStill && areAsked && (wave > 0 || !algebra.hasUnknown)) return to;
    const next = new Settled({ ...to.moment, registers, latches: heldLatches(to), before: to });
    if (isLast) return next;
    from = to;
    to = next;
    data = next;
  }
}

/** What the latches hold when the logic has settled. */
export function heldLatches(settled: Settled): Float64Array {
  const { latches } = settled.moment.circuit;
  const held = new Float64Array(latches.count);
  for (let l = 0; l < latches.count; l++) held[l] = settled.value(latches.output[l]!);
  return held;
}

/** What a register holds when the logic has settled: asynchronous set and reset have acted. */
export function heldRegister(settled: Settled, register: number): NetValue {
  const { registers } = settled.moment.circuit;
  const hasControl = registers.set[register] !== NO_NET || registers.reset[register] !== NO_NET;
  return hasControl
    ? settled.value(registers.output[register]!)
    : settled.moment.registers[register]!;
}

interface Firing {
  /** For each register whose clock pin may have moved by its edge: where it did. */
  readonly fires: ReadonlyMap<number, NetValue>;
  /** No pin has only now become what may be x. */
  readonly areAsked: boolean;
}

function firing(from: Settled, to: Settled, enabled: NetValue): Firing {
  const { circuit, algebra } = to.moment;
  const { clock, edge, count } = circuit.registers;
  const fires = new Map<number, NetValue>();
  let areAsked = true;
  for (let r = 0; r < count; r++) {
    const pinBefore = from.value(clock[r]!);
    const pinAfter = to.value(clock[r]!);
    // A pin that stays x may have moved: only what is surely 0 or 1 is surely at rest.
    const mayBeUnknown = algebra.mayBeUnknown(pinAfter);
    if (pinBefore === pinAfter && !mayBeUnknown) continue;
    if (pinBefore !== pinAfter && mayBeUnknown) areAsked = false;
    const moved =
      edge[r] === Edge.Rising
        ? algebra.and(algebra.not(pinBefore), pinAfter)
        : algebra.and(pinBefore, algebra.not(pinAfter));
    const fired = algebra.and(enabled, moved);
    if (fired !== algebra.zero) fires.set(r, fired);
  }
  return { fires, areAsked };
}

/** What registers captured in the waves of one phase. */
class Captures {
  readonly #last = new Map<number, { fired: NetValue; data: NetValue; held: NetValue }>();

  /** What all registers hold after a wave; in the last one, x where they would still change. */
  wave(
    to: Settled,
    data: Settled,
    fires: ReadonlyMap<number, NetValue>,
    isLast: boolean,
  ): Float64Array {
    const { circuit, algebra } = to.moment;
    const held = new Float64Array(circuit.registers.count);
    for (let r = 0; r < held.length; r++) {
      held[r] = heldRegister(to, r);
      const fired = fires.get(r);
      if (fired === undefined) continue;
      const next = this.#capture(
        algebra,
        r,
        fired,
        held[r]!,
        data.value(circuit.registers.data[r]!),
      );
      // A set or reset that is active at the edge wins, even if the edge releases it.
      const shown = (value: NetValue): NetValue =>
        driverValue(to.moment, circuit.registers.output[r]!, (net) => to.value(net), value);
      const captured = shown(next);
      held[r] = isLast
        ? algebra.mux(algebra.differs(captured, held[r]!), held[r]!, shown(algebra.unknown))
        : captured;
    }
    return held;
  }

  // To capture the same once more changes nothing: logic must not grow by each wave.
  #capture(
    algebra: Algebra,
    register: number,
    fired: NetValue,
    before: NetValue,
    data: NetValue,
  ): NetValue {
    const last = this.#last.get(register);
    if (last?.fired === fired && last.data === data && last.held === before) return before;
    const held = algebra.mux(fired, before, data);
    this.#last.set(register, { fired, data, held });
    return held;
  }
}

/** The same circuit later: what is held now stays held, and the inputs are others. */
export function withInputs(settled: Settled, inputs: Moment['inputs']): Settled {
  const { kept: _, ...moment } = settled.moment;
  const registers = new Float64Array(moment.circuit.registers.count);
  for (let r = 0; r < registers.length; r++) registers[r] = heldRegister(settled, r);
  const latches = heldLatches(settled);
  return new Settled({ ...moment, inputs, registers, latches, before: settled });
}
