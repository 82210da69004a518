import type { DiagnosticCode } from '../../diagnostics/codes.js';
import type { Position } from '../../diagnostics/sourceMap.js';
import type { LibertyText } from './syntax.js';

/** Which way a pin goes; an internal one is a name inside the cell, a supply has no logic value. */
export type PinDirection = 'input' | 'output' | 'inout' | 'internal' | 'supply';

/** What a pin group says of the logic of its pins. */
export interface PinLogic {
  readonly function: LibertyText | undefined;
  readonly threeState: LibertyText | undefined;
  readonly stateFunction: LibertyText | undefined;
  /** The column of the state table that the pin shows. */
  readonly internalNode: LibertyText | undefined;
  /** The pins that stand for the columns of the state table. */
  readonly inputMap: LibertyText | undefined;
  readonly driverType: LibertyText | undefined;
}

/** A pin of a cell, or one bit of a bus. */
export interface LibertyPin extends PinLogic {
  /** Such as `A`, or `A[3]` for a bit of bus A. */
  readonly name: string;
  readonly direction: PinDirection;
  /** The bus or bundle that it belongs to, and its place there from the left. */
  readonly vector: LibertyVector | undefined;
  readonly place: number;
  /** Where its group begins. */
  readonly start: Position;
  readonly end: Position;
}

/** A bus or bundle: one name for several pins. */
export interface LibertyVector {
  readonly name: string;
  /** Indices into the cell's pins, from left to right. */
  readonly pins: number[];
  /** Declared left and right index of a bus. */
  readonly range: BitRange | undefined;
}

/** The indices of a bus: `from` is the leftmost, as the first of `[3:0]`. */
export interface BitRange {
  readonly from: number;
  readonly to: number;
}

/** A terminal of the cell: a pin, or a whole bus. The pins of a bundle are terminals each. */
export interface LibertyPort {
  readonly name: string;
  readonly direction: Exclude<PinDirection, 'internal'>;
  /** Indices into the cell's pins, least significant (rightmost) first. */
  readonly pins: readonly number[];
  readonly range: BitRange | undefined;
}

/** The value of a state variable while clear and preset are both active. */
export type BothActive = 'L' | 'H' | 'N' | 'T' | 'X';

/** An `ff`, `ff_bank`, `latch` or `latch_bank` group. */
export interface LibertyState {
  readonly kind: 'register' | 'latch';
  /** Names of the state and of its inverse; either may be empty. */
  readonly name: string;
  readonly inverse: string;
  /** Number of elements of a bank. */
  readonly width: number | undefined;
  /** The texts of its functions by attribute, such as `next_state`. */
  readonly functions: ReadonlyMap<string, LibertyText>;
  /** `clear_preset_var1` and `clear_preset_var2`. */
  readonly bothState: BothActive | undefined;
  readonly bothInverse: BothActive | undefined;
  readonly start: Position;
  readonly end: Position;
}

/** A `statetable` group; its text is looked at when the cell is used. */
export interface LibertyStateTable {
  readonly inputs: readonly string[];
  readonly nodes: readonly string[];
  readonly table: LibertyText | undefined;
  readonly start: Position;
  readonly end: Position;
}

/** Something wrong with a cell, which matters once the cell is used. */
export interface LibertyProblem {
  readonly code: DiagnosticCode;
  readonly message: string;
  readonly start: Position;
  readonly end: Position;
}

/** The logic of a cell as its library tells it; function texts are not looked into yet. */
export interface LibertyCell {
  readonly name: string;
  /** Place of the name. */
  readonly start: Position;
  readonly end: Position;
  readonly pins: readonly LibertyPin[];
  readonly ports: readonly LibertyPort[];
  readonly vectors: readonly LibertyVector[];
  readonly states: readonly LibertyState[];
  readonly stateTable: LibertyStateTable | undefined;
  /** The kind of an integrated clock gate, such as `latch_posedge`. */
  readonly clockGate: LibertyText | undefined;
  /** Whether a `test_cell` group tells of its scan mode, which the cell's own logic has too. */
  readonly hasTestCell: boolean;
  /** Other spellings of pins by their names: with `bus_naming_style` `%s<%d>`, `A<3>`. */
  readonly aliases: ReadonlyMap<string, string>;
  readonly problems: readonly LibertyProblem[];
}

/** The cells of a library, in order. */
export interface LibertyLibrary {
  readonly name: string;
  readonly cells: readonly LibertyCell[];
}
