import { Edge } from '../../circuit/circuit.js';
import { NO_NET } from '../../circuit/ids.js';
import { clockPins } from '../../circuit/memoryPorts.js';
import { waveDepths } from '../../circuit/waveDepths.js';
import type { Algebra, NetValue } from './algebra.js';
import { heldLatches, heldRegister } from './heldValues.js';
import { areAlike, doubtful } from './lastWrites.js';
import type { PendingWrite } from './memoryLogic.js';
import type { Moment } from './moment.js';
import { actingControls, restingIn, shownIn } from './pulseControls.js';
import { Settled } from './settled.js';
import { heldByTables, tableEvents } from './tableEvents.js';

/** What the waves of one phase depend on. */
export interface WaveRules {
  /** Nothing is captured where this is 0. */
  readonly enabled: NetValue;
  /** Most waves in one phase, see `waveLimit`. */
  readonly limit: number;
  /** Takes what is 1 where registers still move after the last wave, and their nets. */
  readonly endless: (stillMoves: NetValue, nets: readonly number[]) => void;
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
  const pins = new MovingPins(first);
  for (let wave = 0; ; wave++) {
    const { fires, areAsked } = firing(from, to, rules.enabled, (pin) => pins.canMove(pin, wave));
    const events = tableEvents({ from, to, isFirst: wave === 0, enabled: rules.enabled });
    const controls = actingControls(to);
    if (fires.size === 0 && events.size === 0 && controls.size === 0 && areAsked) return to;
    const isLast = wave === rules.limit;
    if (isLast && !algebra.hasUnknown) {
      const moving = stillMoving(to, fires, events, controls);
      rules.endless(
        [...moving.values()].reduce((any, each) => algebra.or(any, each)),
        [...moving.keys()],
      );
      return to;
    }
    const guard = wave === 0 ? undefined : from;
    const registers = captures.wave(to, data, { fires, controls, guard, isLast });
    // A pin that is x may move at any time: it is asked again with the data of after the change,
    // and after it has become x.
    const writes = captures.writes(to, data, fires, isLast);
    const areKept = registers.every((held, r) => held === heldRegister(to, r));
    const isStill = areKept && writes === to.moment.writes && events.size === 0;
    if (isStill && areAsked && (wave > 0 || !algebra.hasUnknown)) return to;
    const latches = heldLatches(to);
    heldByTables(to, events, isLast, registers, latches);
    const next = new Settled({ ...to.moment, registers, latches, writes, before: to });
    if (isLast) return restingIn(next);
    from = to;
    to = next;
    data = next;
  }
}

interface Firing {
  /** For each of `clockPins` that may have moved by its edge: where it did. */
  readonly fires: ReadonlyMap<number, NetValue>;
  /** No pin has only now become what may be x. */
  readonly areAsked: boolean;
}

/** Which clock pins can still move in a wave, as far as the levels of the clocks tell. */
class MovingPins {
  readonly #first: Settled;
  #depths: Float64Array | undefined;

  constructor(first: Settled) {
    this.#first = first;
  }

  canMove(pin: number, wave: number): boolean {
    if (wave === 0) return true;
    this.#depths ??= this.#find();
    return wave <= this.#depths[pin]!;
  }

  #find(): Float64Array {
    const { circuit, algebra, inputs } = this.#first.moment;
    const { zero, one } = algebra;
    return waveDepths(circuit, (net) => {
      const value = inputs(net);
      return value === zero ? 0 : value === one ? 1 : undefined;
    });
  }
}

function firing(
  from: Settled,
  to: Settled,
  enabled: NetValue,
  canMove: (pin: number) => boolean,
): Firing {
  const { circuit, algebra, pulses, tables } = to.moment;
  const { clock, edge } = clockPins(circuit);
  const fires = new Map<number, NetValue>();
  let areAsked = true;
  for (let r = 0; r < clock.length; r++) {
    if (tables.of(circuit.registers.output[r] ?? NO_NET) >= 0) continue;
    const pinBefore = from.value(clock[r]!);
    const pinAfter = to.value(clock[r]!);
    // A pin that stays x may have moved, unless nothing is left that could move it.
    const mayBeUnknown = algebra.mayBeUnknown(pinAfter);
    if (mayBeUnknown ? !canMove(r) : pinBefore === pinAfter) continue;
    if (pinBefore !== pinAfter && mayBeUnknown) areAsked = false;
    const moved =
      edge[r] === Edge.Rising
        ? algebra.and(algebra.not(pinBefore), pinAfter)
        : algebra.and(pinBefore, algebra.not(pinAfter));
    const fired = algebra.and(enabled, moved);
    if (fired === algebra.zero) continue;
    if (pulses.delayed.length > 0 && algebra.areSame(fired, algebra.zero)) continue;
    fires.set(r, fired);
  }
  return { fires, areAsked };
}

/** What happens in one wave. */
interface Wave {
  /** Where the clock pin of a register fires, by register. */
  readonly fires: ReadonlyMap<number, NetValue>;
  /** What `actingControls` found. */
  readonly controls: ReadonlyMap<number, NetValue>;
  /** The moment before, in which set and reset may still have been active. */
  readonly guard: Settled | undefined;
  readonly isLast: boolean;
}

/** Where something would move in a further wave, by the net that does. */
function stillMoving(
  to: Settled,
  fires: ReadonlyMap<number, NetValue>,
  events: ReadonlyMap<number, NetValue>,
  controls: ReadonlyMap<number, NetValue>,
): Map<number, NetValue> {
  const { circuit, algebra, tables } = to.moment;
  const { clock } = clockPins(circuit);
  const moving = new Map<number, NetValue>();
  const add = (net: number, when: NetValue): void => {
    moving.set(net, algebra.or(moving.get(net) ?? algebra.zero, when));
  };
  for (const [pin, fired] of fires) add(clock[pin]!, fired);
  for (const [entry, held] of events) {
    add(tables.output(entry), algebra.differs(held, to.value(tables.output(entry))));
  }
  for (const [register, held] of controls) {
    const output = circuit.registers.output[register]!;
    add(output, algebra.differs(held, to.value(output)));
  }
  return moving;
}

/** What registers and memories captured in the waves of one phase. */
class Captures {
  #lastWrites: readonly PendingWrite[] = [];
  readonly #last = new Map<number, { fired: NetValue; data: NetValue; held: NetValue }>();

  /** What all registers hold after a wave; in the last one, x where they would still change. */
  wave(to: Settled, data: Settled, { fires, controls, guard, isLast }: Wave): Float64Array {
    const { circuit, algebra, pulses } = to.moment;
    const held = new Float64Array(circuit.registers.count);
    for (let r = 0; r < held.length; r++) {
      const before = heldRegister(to, r);
      held[r] = before;
      const fired = fires.get(r);
      if (fired === undefined && !controls.has(r)) continue;
      const output = circuit.registers.output[r]!;
      let next = controls.get(r);
      if (fired !== undefined) {
        const taken = data.value(circuit.registers.data[r]!);
        const isGuarded = guard !== undefined && pulses.isGuarded[r] === 1;
        const guarded = isGuarded ? shownIn(guard, output, taken) : taken;
        // A set or reset that is active at the edge wins, even if the edge releases it.
        next = shownIn(to, output, this.#capture(algebra, r, fired, before, guarded));
      }
      if (pulses.delayed.length > 0 && algebra.areSame(next!, before)) continue;
      if (!isLast) held[r] = next!;
      else {
        const { unknown } = algebra;
        const doubt = pulses.isDelayed[r] === 1 ? unknown : shownIn(to, output, unknown);
        held[r] = algebra.mux(algebra.differs(next!, before), before, doubt);
      }
    }
    return held;
  }

  /** What has been written after a wave; the list itself stays where nothing new was. */
  writes(
    to: Settled,
    data: Settled,
    fires: ReadonlyMap<number, NetValue>,
    isLast: boolean,
  ): readonly PendingWrite[] {
    const { circuit, memories, algebra, writes } = to.moment;
    const own: PendingWrite[] = [];
    for (let port = 0; port < memories.writeCount; port++) {
      const fired = fires.get(circuit.registers.count + port);
      if (fired === undefined) continue;
      const write = memories.write(port, fired, (net) => data.value(net));
      if (write !== undefined) own.push(write);
    }
    if (own.length === 0 || areAlike(own, this.#lastWrites)) return writes;
    this.#lastWrites = own;
    return [...writes, ...(isLast ? doubtful(algebra, own) : own)];
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
