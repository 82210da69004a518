/**
 * The ways to run a design that are compared: straight-line generated code; the same module by its
 * table, another algorithm; the interpreters; straight-line C at optimization level 2, for any
 * machine of the kind and for this very one (`-march=native`).
 */
export const benchEngines = [
  'wasm',
  'table',
  'bytecode',
  'reference',
  'native',
  'nativeMarch',
] as const;

/** One of `benchEngines`. */
export type BenchEngine = (typeof benchEngines)[number];

/** All but the one that the others are compared with. */
export type ComparedEngine = Exclude<BenchEngine, 'wasm'>;

/** How fast an engine was. */
export interface Timing {
  /** Median of the rounds. */
  readonly nsPerCycle: number;
  /** Nanoseconds a cycle in the fastest and in the slowest round. */
  readonly fastest: number;
  readonly slowest: number;
  /** Nanoseconds a cycle in the best of many short bursts: hardly disturbed by other programs. */
  readonly best: number;
  /** Cycles measured, all rounds together. */
  readonly cycles: number;
}

/** The figures of one engine. */
export interface EngineFigures extends Timing {
  /**
   * Milliseconds from the circuit to an engine that is ready: passes, emission and instantiation
   * for `wasm` and `table`, passes for `bytecode`, emission and C compilation for `native` and
   * `nativeMarch`.
   */
  readonly buildMs: number;
}

/** How much code a cycle takes. */
export interface CodeFigures {
  /** Operations on single bits, of any width of the machine's words. */
  readonly operations: number;
  /** Operations on sixteen bits at a time. */
  readonly vectorOperations: number;
  /** Of the module. */
  readonly bytes: number;
  readonly operationsPerGate: number;
  readonly bytesPerGate: number;
}

/** Milliseconds from pressing return to the end of a run of one cycle: medians of a few runs. */
export interface FirstAnswer {
  /** With nothing known from before. */
  readonly coldMs: number;
  /** With the netlist and the module in the cache. */
  readonly cachedMs: number;
}

/** What `bench` found; printed as it stands by `--json`. */
export interface BenchResult {
  readonly circuit: string;
  readonly gates: number;
  readonly registers: number;
  /** Cycles of generated code that were measured. */
  readonly cycles: number;
  readonly engines: Readonly<
    Record<'wasm' | 'bytecode' | 'reference', EngineFigures> &
      Partial<Record<BenchEngine, EngineFigures>>
  >;
  /** Nanoseconds a cycle of `wasm`, in the best burst, where each row is held for 64 cycles. */
  readonly heldNs: number;
  readonly code: CodeFigures;
  /** Measured by the command alone. */
  readonly firstAnswer?: FirstAnswer;
  /** How many times as long as `wasm` each other engine takes for a cycle. */
  readonly ratios: Readonly<Partial<Record<ComparedEngine, number>>>;
  /** In how many cycles each other engine's response was compared with that of `wasm`, and equal. */
  readonly agreement: Readonly<Partial<Record<ComparedEngine, number>>>;
  readonly rounds: number;
  readonly notes: readonly string[];
}

/** A number with the five digits that a measurement is good for. */
export const fiveDigits = (value: number): number => Number(value.toPrecision(5));
