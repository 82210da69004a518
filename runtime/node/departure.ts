import type { RunBlock } from '../stream.js';

/** A value that is not as expected. */
export interface Departure {
  readonly cycle: number;
  /** A port or a part of one, as the expectation names it. */
  readonly port: string;
  /** As the expectation has it. */
  readonly expected: string;
  /** In the form of a response table. */
  readonly actual: string;
  /** Where the expectation stands: `FILE:LINE:COL`, or a file alone. */
  readonly place: string;
}

/** `FILE:LINE:COL: cycle 12: y is 0x1f, expected 0x1e`. */
export const departureText = ({ place, cycle, port, actual, expected }: Departure): string =>
  `${place}: cycle ${cycle}: ${port} is ${actual}, expected ${expected}`;

/** Compares a response with what is expected while both go by. */
export interface ResponseChecker {
  /**
   * The departures of a block in order, at most `most` of them. Blocks come in order and without
   * gaps. Throws where the expectation cannot be used.
   */
  check(block: RunBlock, most: number): Departure[] | Promise<Departure[]>;
  /**
   * Passes over what is expected before a cycle, which will be the first one checked. Absent where
   * what is expected depends on all that went by.
   */
  skipTo?(cycle: number): Promise<void>;
  /** The first cycle that the expectation tells of and the response did not reach, if any. */
  finish(): number | undefined | Promise<number | undefined>;
  /** Lets go of files. */
  close(): void | Promise<void>;
}
