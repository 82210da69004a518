import type { Position } from '../../diagnostics/sourceMap.js';

/** A word or the inside of a string, as it stands in the library (with its `\` line ends). */
export interface LibertyText {
  readonly text: string;
  readonly start: Position;
  readonly end: Position;
}

/**
 * A group of the library that has to do with logic, such as `pin (A) { … }`. The table of rules
 * tells which groups and attributes are kept.
 */
export interface LibertyGroup {
  /** The word before the parentheses. */
  readonly kind: string;
  /** What stands in the parentheses. */
  readonly names: readonly LibertyText[];
  /** Place of the header, from its word to the closing parenthesis. */
  readonly start: Position;
  readonly end: Position;
  /** The values of the last attribute of each name: one of a simple one, any number of others. */
  readonly attributes: ReadonlyMap<string, readonly LibertyText[]>;
  readonly groups: readonly LibertyGroup[];
}
