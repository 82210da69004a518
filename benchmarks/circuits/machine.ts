import { decrement, tree, zipWith } from './logic.js';
import { Module } from './netlistWriter.js';
import type { Bit, Bus } from './nets.js';

/** How long things last in the canal lock, in cycles. */
export interface LockTimes {
  /** A gate's way between open and closed. */
  readonly gate: number;
  /** The longest wait for the water before the alarm. */
  readonly water: number;
  /** The shortest time a gate stands open. */
  readonly dwell: number;
}

/** The states of the lock, in the order of the bits of `state`. */
export const lockStates = [
  'open_below',
  'closing_below',
  'filling',
  'opening_above',
  'open_above',
  'closing_above',
  'draining',
  'opening_below',
  'alarm',
] as const;

type State = (typeof lockStates)[number];

interface Transition {
  readonly from: State;
  readonly to: State;
  readonly when: Bit;
}

/**
 * The sequencer of a canal lock, one flip-flop a state and a timer, as `lock` with inputs `clk`,
 * `reset` (asynchronous), `call_below`, `call_above`, `doorway_clear`, `level_high`, `level_low`,
 * `acknowledge`, the motor and valve outputs below, and `state[8:0]`.
 *
 * Reset: open below, with no dwell. A call from either side closes the open gate when its dwell
 * is over and the doorway clear; then the chamber fills or drains to its level and the other gate
 * opens. Water that does not reach its level in time raises the alarm, which stops everything;
 * acknowledged, the chamber drains. A step that a timer ends takes that many cycles and one.
 */
export function lock(times: LockTimes): Module {
  const m = new Module('lock');
  const clk = m.input('clk');
  const reset = m.input('reset');
  const callBelow = m.input('call_below');
  const callAbove = m.input('call_above');
  const doorwayClear = m.input('doorway_clear');
  const levelHigh = m.input('level_high');
  const levelLow = m.input('level_low');
  const acknowledge = m.input('acknowledge');

  const width = Math.max(...Object.values(times)).toString(2).length;
  const timer = m.wires('timer', width);
  const running = m.named('timer_running', tree(m, 'or', timer));
  const expired = m.named('timer_expired', m.not(running));
  const called = m.named('called', m.or(callBelow, callAbove));
  const depart = m.named('depart', m.and(expired, called, doorwayClear));
  const transitions: Transition[] = [
    { from: 'open_below', to: 'closing_below', when: depart },
    { from: 'closing_below', to: 'filling', when: expired },
    { from: 'filling', to: 'opening_above', when: levelHigh },
    { from: 'filling', to: 'alarm', when: m.nor(running, levelHigh) },
    { from: 'opening_above', to: 'open_above', when: expired },
    { from: 'open_above', to: 'closing_above', when: depart },
    { from: 'closing_above', to: 'draining', when: expired },
    { from: 'draining', to: 'opening_below', when: levelLow },
    { from: 'draining', to: 'alarm', when: m.nor(running, levelLow) },
    { from: 'opening_below', to: 'open_below', when: expired },
    { from: 'alarm', to: 'draining', when: acknowledge },
  ];
  const { state, entering } = oneHot(m, clk, reset, transitions);
  m.flipFlops(timer, nextTimer(m, timer, running, entering, times), { clock: clk, reset });

  const is = (name: State) => state[lockStates.indexOf(name)]!;
  m.output('signal_below', m.and(is('open_below'), doorwayClear));
  m.output('signal_above', m.and(is('open_above'), doorwayClear));
  m.output('close_below', m.gate('buf', [is('closing_below')]));
  m.output('close_above', m.gate('buf', [is('closing_above')]));
  m.output('open_below', m.gate('buf', [is('opening_below')]));
  m.output('open_above', m.gate('buf', [is('opening_above')]));
  m.output('fill', m.gate('buf', [is('filling')]));
  m.output('drain', m.gate('buf', [is('draining')]));
  m.output('horn', m.gate('buf', [is('alarm')]));
  m.output('state', state);
  return m;
}

// One flip-flop a state, the first set by reset; `entering` is 1 in the cycle before a state.
function oneHot(m: Module, clock: Bit, reset: Bit, transitions: readonly Transition[]) {
  const state = m.wires('state', lockStates.length);
  const taken = transitions.map(({ from, to, when }) =>
    m.named(`${from}_to_${to}`, m.and(state[lockStates.indexOf(from)]!, when)),
  );
  const entering = lockStates.map((name) =>
    tree(
      m,
      'or',
      taken.filter((_, i) => transitions[i]!.to === name),
    ),
  );
  const next = lockStates.map((name, i) => {
    const leaving = tree(
      m,
      'or',
      taken.filter((_, t) => transitions[t]!.from === name),
    );
    return m.or(entering[i]!, m.and(state[i]!, m.not(leaving)));
  });
  m.flipFlops(state, next, { clock, reset, value: 1n });
  return { state, entering };
}

// Counts down to 0, where it rests; on entering a state it takes that state's time.
function nextTimer(m: Module, timer: Bus, running: Bit, entering: Bus, times: LockTimes): Bus {
  const timeOf: Record<State, number> = {
    open_below: times.dwell,
    closing_below: times.gate,
    filling: times.water,
    opening_above: times.gate,
    open_above: times.dwell,
    closing_above: times.gate,
    draining: times.water,
    opening_below: times.gate,
    alarm: 0,
  };
  const moving = m.named('moving', tree(m, 'or', entering));
  const counting = m.named('counting', m.and(running, m.not(moving)));
  return zipWith(m, 'and', decrement(m, timer), counting).map((bit, i) => {
    const loaded = entering.filter((_, s) => (timeOf[lockStates[s]!] >> i) & 1);
    return loaded.length === 0 ? bit : m.or(bit, tree(m, 'or', loaded));
  });
}
