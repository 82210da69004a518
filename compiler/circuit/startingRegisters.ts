import type { Circuit } from './circuit.js';
import { type ClockPorts, portBitName } from './clockPorts.js';
import { HeldInputs } from './heldInputs.js';
import { NO_NET } from './ids.js';
import { X } from './values.js';

// Inputs are looked at until so many fan-in nets have been, for each one of the circuit.
const EFFORT = 1;
const LEAST_EFFORT = 1_000_000;

/** How resets are called, whatever stands before and behind: `rst_n`, `sys_reset`, `clrb`, `arst0`. */
const RESET_NAME = /(?:^|[_./[])n?[as]?(?:re?se?t|rst|clr|clear)(?:$|[^a-z]|[nbi](?:$|[^a-z]))/i;

/** What `openStarts` looks at. */
interface Clocked {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
}

const known = new WeakMap<Circuit, Uint32Array>();

/**
 * The registers whose start is left open: they have neither an initial value nor a set or reset,
 * and no synchronous reset either, which is an input with the name of one that brings them to a
 * known value, whatever all else is, when it is held at its active level, if need be beside another
 * input at one level (as a scan enable). The search is cut off by its effort, so that it is linear.
 * Worked out once for each circuit.
 */
export function openStarts(design: Clocked): Uint32Array {
  const { circuit } = design;
  const found = known.get(circuit) ?? findOpenStarts(design);
  known.set(circuit, found);
  return found;
}

function findOpenStarts({ circuit, clocks }: Clocked): Uint32Array {
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
  const effort = Math.max(LEAST_EFFORT, EFFORT * (circuit.netCount + circuit.fanin.length));
  /** Outputs in `open` that holding an input at a level makes known; `visit` looks on meanwhile. */
  const madeKnown = (input: number, level: number, visit?: () => void): number[] => {
    const before = held.count;
    held.hold(input, level);
    const known: number[] = [];
    for (const net of held.knownSince(before)) if (open.has(net)) known.push(net);
    visit?.();
    held.release(before);
    return known;
  };
  const close = (known: Iterable<number>): void => {
    for (const net of known) open.delete(net);
  };
  close(held.knownSince(0));
  const inputs = dataInputs(circuit, clocks);
  for (const { net: reset } of inputs.filter(({ name }) => RESET_NAME.test(name))) {
    // Its active level decides more.
    const counts: number[] = [];
    const [low, high] = [0, 1].map((each) => madeKnown(reset, each, () => counts.push(held.count)));
    const level = Number(counts[1]! > counts[0]!);
    close(level === 1 ? high! : low!);
    for (const { net } of inputs) {
      for (const other of [0, 1]) {
        if (open.size === 0 || held.work > effort) return;
        let both: number[] = [];
        madeKnown(reset, level, () => {
          both = madeKnown(net, other);
        });
        if (both.length === 0) continue;
        // What follows without the reset, or whatever the other input is, is data that passes.
        const alone = new Set(madeKnown(net, other));
        madeKnown(reset, level, () => {
          const otherwise = new Set(madeKnown(net, 1 - other));
          close(both.filter((each) => !alone.has(each) && !otherwise.has(each)));
        });
      }
    }
  }
}

/** The input bits that are no clocks. */
function dataInputs({ inputs }: Circuit, { ports }: ClockPorts): { net: number; name: string }[] {
  const clocks = new Set<number>(ports.map(({ net }) => net));
  return inputs
    .flatMap((port) => Array.from(port.nets, (net, bit) => ({ net, name: portBitName(port, bit) })))
    .filter(({ net }) => !clocks.has(net));
}
