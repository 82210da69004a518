import type { Expression } from './expression.js';

/** A pin of a cell; `width` is more than 1 for a bus. */
export interface Pin {
  readonly name: string;
  readonly direction: 'input' | 'output';
  readonly width: number;
}

/** What all cells have. */
interface CellBase {
  readonly name: string;
  /** Its name without the library's prefix and the drive. */
  readonly family: string;
  /** How many times the smallest output stage. */
  readonly drive: number;
  readonly pins: readonly Pin[];
}

/** Outputs that are functions of the inputs. */
export interface LogicCell extends CellBase {
  readonly kind: 'logic';
  readonly functions: readonly { readonly pin: string; readonly is: Expression }[];
  /** Whether the Verilog model is a primitive of its own in place of gates. */
  readonly isPrimitive: boolean;
}

/** An output that is z unless `enable` is 1, or 0 where that is named `en_n`. */
export interface TriStateCell extends CellBase {
  readonly kind: 'triState';
  readonly is: Expression;
  readonly enable: 'en' | 'en_n';
}

/** Nothing but area: fill, taps, capacitors; an antenna diode has one input. */
export interface PhysicalCell extends CellBase {
  readonly kind: 'physical';
}

/** Asynchronous clear and preset, active at 0 on pins `clr_n` and `set_n`. */
export interface Controls {
  readonly clear: boolean;
  readonly preset: boolean;
  /** Which of them has its way where both are active. */
  readonly wins: 'clear' | 'preset';
}

/** How the bits of a multi-bit cell are reached: vectors `d` and `q`, or pins `d0`, `d1`, … */
export type BankForm = 'bus' | 'bundle';

/** A flip-flop, or several behind one clock pin. */
export interface FlopCell extends CellBase, Controls {
  readonly kind: 'flop';
  readonly edge: 'rise' | 'fall';
  readonly clock: 'ck' | 'ck_n';
  readonly hasEnable: boolean;
  readonly hasScan: boolean;
  /** What it captures, a function of its pins and of its own `state`. */
  readonly next: Expression;
  readonly bits: number;
  readonly form: BankForm;
}

/** A transparent latch, or several behind one enable pin. */
export interface LatchCell extends CellBase, Controls {
  readonly kind: 'latch';
  readonly enable: 'g' | 'g_n';
  readonly bits: number;
  readonly form: BankForm;
}

/**
 * An integrated clock gate: `gck` follows `ck` in the cycles in which `en` was 1 before the active
 * edge, and rests at 0 (for rising edges) or 1 (for falling ones) in the others.
 */
export interface ClockGateCell extends CellBase {
  readonly kind: 'clockGate';
  readonly edge: 'rise' | 'fall';
  /** Where the test enable `te` joins: before the latch, after it, or nowhere. */
  readonly test: 'before' | 'after' | 'none';
  readonly hasLatch: boolean;
}

/** A cell of the library. */
export type Cell = LogicCell | TriStateCell | PhysicalCell | FlopCell | LatchCell | ClockGateCell;

/** The name of the library, and what the names of its cells begin with. */
export const libraryName = 'hobnail';
const prefix = 'hob';

/** `hob2_nand3`: the drive stands in the prefix. */
export const cellName = (family: string, drive: number): string => `${prefix}${drive}_${family}`;

/** The name of a primitive of the library. */
export const primitiveName = (what: string): string => `${prefix}_p_${what}`;

/** Scalar inputs by name. */
export const inputs = (...names: readonly string[]): Pin[] =>
  names.map((name) => ({ name, direction: 'input', width: 1 }));

/** Scalar outputs by name. */
export const outputs = (...names: readonly string[]): Pin[] =>
  names.map((name) => ({ name, direction: 'output', width: 1 }));

/** Names of the pins of one direction. */
export const pinNames = ({ pins }: Cell, direction: Pin['direction']): string[] =>
  pins.filter((pin) => pin.direction === direction).map(({ name }) => name);

/** Area in the library's unit: it grows with the pins, the bits and the drive. */
export function areaOf(cell: Cell): number {
  const pins = cell.pins.reduce((sum, { width }) => sum + width, 1);
  const stage = cell.kind === 'flop' ? 4 : cell.kind === 'latch' ? 2.5 : 0.8;
  return Number((stage * pins * (0.75 + 0.25 * cell.drive)).toFixed(2));
}
