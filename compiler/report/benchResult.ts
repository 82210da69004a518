/** The ways to run a design that are compared. */
export type BenchEngine = 'wasm' | 'bytecode' | 'reference' | 'native';

/** All but the one that the others are compared with. */
export type ComparedEngine = Exclude<BenchEngine, 'wasm'>;

/** How fast an engine was. */
export interface Timing {
  /** Median of the rounds. */
  readonly nsPerCycle: number;
  /** Nanoseconds a cycle in the fastest and in the slowest round. */
  readonly fastest: number;
  readonly slowest: number;
  /** Cycles measured, all rounds together. */
  readonly cycles: number;
}

/** The figures of one engine. */
export interface EngineFigures extends Timing {
  /**
   * Milliseconds from the circuit to an engine that is ready: passes, emission and instantiation
   * for `wasm`, passes for `bytecode`, emission and C compilation for `native`.
   */
  readonly buildMs: number;
}

/** What `bench` found; printed as it stands by `--json`. */
export interface BenchResult {
  readonly circuit: string;
  readonly gates: number;
  readonly registers: number;
  /** Cycles of generated code that were measured. */
  readonly cycles: number;
  readonly engines: Readonly<
    Record<'wasm' | 'bytecode' | 'reference', EngineFigures> & { native?: EngineFigures }
  >;
  /** How many times as long as `wasm` each other engine takes for a cycle. */
  readonly ratios: Readonly<Partial<Record<ComparedEngine, number>>>;
  /** In how many cycles each other engine's response was compared with that of `wasm`, and equal. */
  readonly agreement: Readonly<Partial<Record<ComparedEngine, number>>>;
  readonly rounds: number;
  readonly notes: readonly string[];
}

/** A number with the five digits that a measurement is good for. */
export const fiveDigits = (value: number): number => Number(value.toPrecision(5));
