import { Edge, Priority } from '../../circuit/circuit.js';
import { GateKind } from '../../circuit/gates.js';
import { type NetId, NO_NET, netId } from '../../circuit/ids.js';
import type { BothActive, LibertyState } from './cell.js';
import type { CellBuild } from './cellBuild.js';
import { type Context, scalarContext } from './cellNets.js';

/** The nets of a state variable, one for each element, the rightmost first. */
export interface StateNets {
  readonly name: string;
  readonly first: NetId;
  /** Undefined for a single one. */
  readonly width: number | undefined;
}

/**
 * Makes the nets of a state variable and gives it and its inverse their meaning in functions; what
 * the state does is built later, when all names are known.
 */
export function declareState(build: CellBuild, state: LibertyState): StateNets {
  const { name, inverse, width, start, end } = state;
  const { nets, recording } = build;
  const count = width ?? 1;
  const first = recording.net();
  for (let element = 1; element < count; element++) recording.net();
  const netAt = (place: number): NetId => netId(first + count - 1 - place);
  const inverses: (NetId | undefined)[] = [];
  const inverseAt = (place: number): NetId => {
    const known = inverses[place];
    if (known !== undefined) return known;
    // Made before it is driven: its own functions may name it.
    const net = recording.net();
    inverses[place] = net;
    driveInverse(build, state, { state: netAt(place), inverse: net }, contextAt(width, place));
    return net;
  };
  for (const [own, net] of [
    [name, netAt],
    [inverse, inverseAt],
  ] as const) {
    if (own === '' || nets.addState(own, { width, range: undefined, net })) continue;
    const message = `state ${own} is described twice; remove one of the two`;
    build.report('name-redeclared', message, { start, end });
  }
  return { name, first, width };
}

const contextAt = (width: number | undefined, place: number): Context =>
  width === undefined ? scalarContext : { place, range: undefined };

/** Builds the registers or latches of a state variable. */
export function buildState(build: CellBuild, state: LibertyState, { first }: StateNets): void {
  const count = state.width ?? 1;
  for (let place = 0; place < count; place++) {
    const element = {
      state,
      output: netId(first + count - 1 - place),
      context: contextAt(state.width, place),
    };
    if (state.kind === 'register') buildRegister(build, element);
    else buildLatch(build, element);
  }
}

/** One element of a state variable. */
interface Element {
  readonly state: LibertyState;
  readonly output: NetId;
  readonly context: Context;
}

function buildRegister(build: CellBuild, element: Element): void {
  const { state, output, context } = element;
  const { recording } = build;
  const clockText = required(build, state, 'clocked_on');
  const dataText = required(build, state, 'next_state');
  const controls = controlsOf(build, state, context);
  if (clockText === undefined || dataText === undefined || controls === undefined) return;
  const clock = build.polarity(clockText, context);
  const next = build.function(dataText, context);
  const slaveText = state.functions.get('clocked_on_also');
  const slave = slaveText && build.function(slaveText, context);
  if (clock === undefined || next === undefined) return;
  const { set, reset, priority, hold } = controls;
  const edge = clock.isInverted ? Edge.Falling : Edge.Rising;
  const master = slaveText === undefined ? output : recording.net();
  const data = hold === undefined ? next : build.gate(GateKind.Mux, hold, next, master);
  recording.register({ output: master, clock: clock.net, edge, data, set, reset, priority });
  if (slave === undefined) return;
  // The master's value passes while the slave's clock is active: at once where the two edges
  // come together, else at the slave's own.
  const enable = enabledBy(build, slave, hold);
  recording.latch({ output, enable, data: master, set, reset, priority });
}

function buildLatch(build: CellBuild, element: Element): void {
  const { state, output, context } = element;
  const also = state.functions.get('enable_also');
  if (also !== undefined) {
    const message = `latch ${state.name} has a second enable, which is not read; ${MODEL_CURE}`;
    build.report('not-supported', message, also);
    return;
  }
  const controls = controlsOf(build, state, context);
  if (controls === undefined) return;
  const { set, reset, priority, hold } = controls;
  const pins = { output, set, reset, priority };
  const isPlain = !state.functions.has('enable') && !state.functions.has('data_in');
  if (isPlain && (set !== NO_NET || reset !== NO_NET)) {
    build.recording.latch(pins);
    return;
  }
  const enableText = required(build, state, 'enable');
  const dataText = required(build, state, 'data_in');
  const enable = enableText && build.function(enableText, context);
  const data = dataText && build.function(dataText, context);
  if (enable === undefined || data === undefined) return;
  build.recording.latch({ ...pins, enable: enabledBy(build, enable, hold), data });
}

/** What a message about a cell that cannot be built from its library proposes. */
export const MODEL_CURE =
  'give the cell a Verilog model in a file that is named before the library';

const enabledBy = (build: CellBuild, enable: NetId, hold: NetId | undefined): NetId =>
  hold === undefined ? enable : build.gate(GateKind.And, enable, build.gate(GateKind.Not, hold));

function required(build: CellBuild, state: LibertyState, name: string) {
  const text = state.functions.get(name);
  if (text === undefined) {
    const what = state.kind === 'register' ? 'flip-flop' : 'latch';
    build.report('syntax-error', `${what} ${state.name} has no ${name}; add it`, state);
  }
  return text;
}

/** The asynchronous pins of an element. */
interface Controls {
  readonly set: NetId;
  readonly reset: NetId;
  readonly priority: number;
  /** 1 where clear and preset together leave the state alone. */
  readonly hold: NetId | undefined;
}

/**
 * What clear and preset do. Where both are active, `clear_preset_var1` decides: L, H and X give
 * that value; N holds the state, at a clock edge too; T, an inversion that depends on how long
 * both last, gives x, and so does a missing attribute. Undefined after a report.
 */
function controlsOf(
  build: CellBuild,
  { functions, bothState }: LibertyState,
  context: Context,
): Controls | undefined {
  const clearText = functions.get('clear');
  const presetText = functions.get('preset');
  const clear = clearText && build.function(clearText, context);
  const preset = presetText && build.function(presetText, context);
  if (clearText !== undefined && clear === undefined) return undefined;
  if (presetText !== undefined && preset === undefined) return undefined;
  const reset = clear ?? NO_NET;
  const set = preset ?? NO_NET;
  if (clear === undefined || preset === undefined || bothState !== 'N') {
    return { set, reset, priority: priorities[bothState ?? 'X'], hold: undefined };
  }
  return {
    set: build.gate(GateKind.And, preset, build.gate(GateKind.Not, clear)),
    reset: build.gate(GateKind.And, clear, build.gate(GateKind.Not, preset)),
    priority: Priority.ResetWins,
    hold: build.gate(GateKind.And, clear, preset),
  };
}

const priorities: Readonly<Record<BothActive, number>> = {
  L: Priority.ResetWins,
  H: Priority.SetWins,
  N: Priority.ResetWins,
  T: Priority.Unknown,
  X: Priority.Unknown,
};

const opposites: Readonly<Record<BothActive, BothActive>> = {
  L: 'H',
  H: 'L',
  N: 'N',
  T: 'X',
  X: 'X',
};

/**
 * The inverse of a state, which `clear_preset_var2` sets apart from it only while clear and preset
 * are both active: L and H give that value, all else x where it is not what the inverse has then.
 */
function driveInverse(
  build: CellBuild,
  { functions, bothState, bothInverse }: LibertyState,
  nets: { readonly state: NetId; readonly inverse: NetId },
  context: Context,
): void {
  const { recording } = build;
  const clearText = functions.get('clear');
  const presetText = functions.get('preset');
  const natural = opposites[bothState ?? 'X'];
  const both = bothInverse === 'T' ? 'X' : (bothInverse ?? natural);
  const isPlain = clearText === undefined || presetText === undefined || both === natural;
  const clear = isPlain ? undefined : build.function(clearText, context);
  const preset = isPlain ? undefined : build.function(presetText, context);
  if (clear === undefined || preset === undefined) {
    recording.drive(nets.inverse, GateKind.Not, [nets.state]);
    return;
  }
  const active = build.gate(GateKind.And, clear, preset);
  if (both === 'L') {
    recording.drive(nets.inverse, GateKind.Nor, [nets.state, active]);
    return;
  }
  const usual = build.gate(GateKind.Not, nets.state);
  if (both === 'H') recording.drive(nets.inverse, GateKind.Or, [usual, active]);
  else {
    const unknown = recording.constant(GateKind.Unknown);
    recording.drive(nets.inverse, GateKind.Mux, [active, usual, unknown]);
  }
}
