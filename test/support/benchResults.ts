import type { BenchEngine, BenchResult } from '../../compiler/report/benchResult.js';

/** A measurement of made-up figures: nanoseconds a cycle of each engine, the same in all rounds. */
export function benchResult(
  circuit: string,
  nanoseconds: Readonly<Partial<Record<BenchEngine, number>>>,
): BenchResult {
  const figures = Object.entries({ wasm: 10, bytecode: 100, reference: 1000, ...nanoseconds }).map(
    ([name, ns]) => [
      name,
      { nsPerCycle: ns, fastest: ns, slowest: ns, best: ns, cycles: 1000, buildMs: 12.5 },
    ],
  );
  return {
    circuit,
    ...{
      gates: 100,
      registers: 10,
      cycles: 1000,
      heldNs: 2.5,
      ratios: {},
      agreement: {},
      rounds: 7,
    },
    engines: Object.fromEntries(figures),
    code: {
      ...{ operations: 120, vectorOperations: 0, bytes: 900 },
      ...{ operationsPerGate: 1.2, bytesPerGate: 9 },
    },
    notes: [],
  };
}
