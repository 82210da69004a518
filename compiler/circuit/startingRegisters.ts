import type { Circuit } from './circuit.js';
import { type ClockPorts, portBitName } from './clockPorts.js';
import { HeldInputs } from './heldInputs.js';
import { NO_NET } from './ids.js';
import { X } from './values.js';

// Inputs are looked at until so many fan-in nets have been, for each one of the circuit.
const EFFORT = 4;
const LEAST_EFFORT = 1_000_000;

/** Inputs beside which a second one is tried. */
const FIRST_INPUTS = 4;

const RESET_NAME = /re?se?t|clr|clear|init|por/i;

/** What `openStarts` looks at. */
interface Clocked {
  readonly circuit: Circuit;
  readonly clocks: ClockPorts;
}

const known = new WeakMap<Circuit, Uint32Array>();

/**
 * The registers whose start is left open: they have neither an initial value nor a set or reset,
 * and no input, held at a level, brings them to a known value while all else is unknown, nor do two
 * inputs of which one decides much. The search is cut off by its effort, so that it is linear.
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

/** Takes outputs of registers out of `open` that inputs bring to a known value. */
function searchResets(circuit: Circuit, clocks: ClockPorts, open: Set<number>): void {
  const held = new HeldInputs(
    circuit,
    clocks.ports.map(({ net }) => net),
  );
  const effort = Math.max(LEAST_EFFORT, EFFORT * (circuit.netCount + circuit.fanin.length));
  const goesOn = (): boolean => open.size > 0 && held.work < effort;
  const inputs = likelyFirst(circuit, clocks);
  /** Tries all inputs at both levels, and tells how many nets each level makes known. */
  const tryAll = (visit?: (input: number, level: number, count: number) => void): void => {
    for (const input of inputs) {
      for (let level = 0; level <= 1 && goesOn(); level++) {
        const before = held.count;
        held.hold(input, level);
        for (const net of held.knownSince(before)) open.delete(net);
        visit?.(input, level, held.count - before);
        held.release(before);
      }
    }
  };
  for (const net of held.knownSince(0)) open.delete(net);
  const tried: { input: number; level: number; count: number }[] = [];
  tryAll((input, level, count) => tried.push({ input, level, count }));
  tried.sort((a, b) => b.count - a.count);
  for (const { input, level } of tried.slice(0, FIRST_INPUTS)) {
    const before = held.count;
    held.hold(input, level);
    tryAll();
    held.release(before);
  }
}

/** The input bits that are no clocks, those with the name of a reset first. */
function likelyFirst({ inputs }: Circuit, { ports }: ClockPorts): number[] {
  const clocks = new Set<number>(ports.map(({ net }) => net));
  const bits = inputs.flatMap((port) =>
    Array.from(port.nets, (net, bit) => ({
      net,
      isReset: RESET_NAME.test(portBitName(port, bit)),
    })),
  );
  const data = bits.filter(({ net }) => !clocks.has(net));
  return [...data.filter(({ isReset }) => isReset), ...data.filter(({ isReset }) => !isReset)].map(
    ({ net }) => net,
  );
}
