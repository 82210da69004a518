import type { Circuit } from './circuit.js';
import { type ClockPorts, portBitName } from './clockPorts.js';
import { HeldInputs } from './heldInputs.js';
import { NO_NET } from './ids.js';
import { X } from './values.js';

/** Inputs are looked at until so many fan-in nets have been, or as many as the circuit has. */
const LEAST_EFFORT = 1_000_000;

/** The words of a name: they stand between other characters, and before a capital letter. */
const WORD_ENDS = /[^a-zA-Z]+|(?<=[a-z])(?=[A-Z])/;

/** A word that names a reset: `rst`, `arst`, `HRESETn`, `clrb`, `resetall`. */
const RESET_WORD = /^[a-z]?(?:reset|rset|rst|clr|clear)(?:all|[nbi]{0,2})$/i;

const isResetName = (name: string): boolean =>
  name.split(WORD_ENDS).some((word) => RESET_WORD.test(word));

/** What `openStarts` looks at. */
interface Clocked {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
}

/**
 * The registers whose start is left open: they have neither an initial value nor a set or reset,
 * and no synchronous reset either, which is an input with the name of one that brings them to a
 * known value, whatever all else is, when it is held at its active level, if need be beside another
 * input at one level (as a scan enable). The search is cut off by its effort, so that it is linear.
 */
export function openStarts({ circuit, clocks }: Clocked): Uint32Array {
  const { registers } = circuit;
  const open = new Set<number>();
  for (let r = 0; r < registers.count; r++) {
    const hasControl = registers.set[r] !== NO_NET || registers.reset[r] !== NO_NET;
    if (registers.initial[r] === X && !hasControl) open.add(registers.output[r]!);
  }
  if (open.size > 0) searchResets(circuit, clocks, open);
  return Uint32Array.from(registers.output.keys()).filter((r) => open.has(registers.output[r]!));
}

/** Takes outputs of registers out of `open` that synchronous resets bring to a known value. */
function searchResets(circuit: Circuit, clocks: ClockPorts, open: Set<number>): void {
  const held = new HeldInputs(
    circuit,
    clocks.ports.map(({ net }) => net),
  );
  const effort = Math.max(LEAST_EFFORT, circuit.netCount + circuit.fanin.length);
  /** Outputs in `open` that holding an input at a level makes known; `visit` looks on meanwhile. */
  const madeKnown = (input: number, level: number, visit?: () => void): number[] => {
    const before = held.count;
    held.hold(input, level);
    const found = [...held.knownSince(before)].filter((net) => open.has(net));
    visit?.();
    held.release(before);
    return found;
  };
  const close = (nets: Iterable<number>): void => {
    for (const net of nets) open.delete(net);
  };
  close(held.knownSince(0));
  const inputs = dataInputs(circuit, clocks);
  for (const { net: reset } of inputs.filter(({ name }) => isResetName(name))) {
    // Its active level decides more.
    const counts: number[] = [];
    const levels = [0, 1].map((each) => madeKnown(reset, each, () => counts.push(held.count)));
    const level = Number(counts[1]! > counts[0]!);
    close(levels[level]!);
    const beside: { input: number; level: number; nets: number[] }[] = [];
    madeKnown(reset, level, () => {
      for (const { net: input } of inputs) {
        if (open.size === 0 || held.work > effort) break;
        const [low, high] = [madeKnown(input, 0), madeKnown(input, 1)];
        // What follows from either level is data that passes, and no reset.
        beside.push({ input, level: 0, nets: without(low, high) });
        beside.push({ input, level: 1, nets: without(high, low) });
      }
    });
    for (const { input, level: other, nets } of beside) {
      if (nets.length > 0) close(without(nets, madeKnown(input, other)));
    }
  }
}

function without(nets: readonly number[], others: readonly number[]): number[] {
  const taken = new Set(others);
  return nets.filter((net) => !taken.has(net));
}

/** The input bits that are no clocks. */
function dataInputs({ inputs }: Circuit, { ports }: ClockPorts): { net: number; name: string }[] {
  const clocks = new Set<number>(ports.map(({ net }) => net));
  return inputs
    .flatMap((port) => Array.from(port.nets, (net, bit) => ({ net, name: portBitName(port, bit) })))
    .filter(({ net }) => !clocks.has(net));
}
