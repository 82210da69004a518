import type { Design } from '../compile.js';
import type { WatchedPlace } from '../run/outlets/outlet.js';
import type { SignalList } from './signalList.js';

/** The cycles to show, first and last. */
export interface WaveWindow {
  readonly from: number;
  /** Infinity for all up to the end of the run. */
  readonly to: number;
}

/** What is to be shown, and of what. */
export interface WaveRequest {
  /** The design as it was read, without what is watched. */
  readonly design: Design;
  readonly list: SignalList;
  readonly window: WaveWindow;
}

/** Values of the nets of a `SignalList` in consecutive cycles, as they are when outputs are sampled. */
export interface WaveRows {
  readonly firstCycle: number;
  readonly cycles: number;
  /** The net at place i of the list is bit i of each row; see `WatchedPlace`. */
  readonly rows: Uint32Array;
  readonly place: WatchedPlace;
}

/** A form in which waves are written: a fresh sink for each request. */
export type WaveForm = (request: WaveRequest) => WaveSink;

/** Turns waves into the bytes of a file; a piece is good until the next one is asked for. */
export interface WaveSink {
  /** What comes first, once the first row is known to come. */
  start(): Iterable<Uint8Array>;
  /** The next rows; they follow each other without gaps, and lie in the window. */
  rows(rows: WaveRows): Iterable<Uint8Array>;
  /** What comes last. */
  end(): Iterable<Uint8Array>;
}
