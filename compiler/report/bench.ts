import { isGate } from '../circuit/gates.js';
import type { Design } from '../compile.js';
import { checkAgreement } from './benchAgreement.js';
import { type Contestant, type OwnEngines, ownEngines } from './benchEngines.js';
import { nativeContestants } from './benchNative.js';
import type { BenchOptions } from './benchOptions.js';
import type {
  BenchEngine,
  BenchResult,
  CodeFigures,
  EngineFigures,
  Timing,
} from './benchResult.js';
import { fiveDigits } from './benchResult.js';
import { BenchRows } from './benchRows.js';
import { timeAlternately } from './benchTiming.js';

/**
 * Measures the engines on one design, all on the same rows of uniform random bits, each from the
 * power-up state `zero`, each reading a stimulus row and writing a response row a cycle.
 *
 * Throws `EngineDisagreement` where two responses differ, and what the engines throw. The
 * generated code runs in one process with the interpreters, C in one of its own.
 */
export async function benchDesign(
  design: Design,
  options: BenchOptions = {},
): Promise<BenchResult> {
  const { seconds = 1, rounds = 7, onProgress = () => {} } = options;
  const { circuit } = design;
  const gates = circuit.kind.reduce((count, kind) => count + Number(isGate(kind)), 0);
  const rows = new BenchRows(design);
  onProgress('compiling to WebAssembly');
  const own = await ownEngines(design, rows);
  const native = await nativeContestants(design, rows, gates, options);
  const contestants: Contestant[] = [...own.contestants, ...native.contestants];
  const isTabled = contestants.some(({ name }) => name === 'table');
  const notes = [...(isTabled ? [TABLE_NOTE] : []), ...native.notes];
  try {
    onProgress('comparing the responses');
    const agreement = await checkAgreement(design.layout, contestants, rows.count);
    const timings = await timeAlternately(contestants, { seconds, rounds, onProgress });
    const code = codeFigures(own.code, gates);
    const heldNs = fiveDigits(own.heldNs());
    const result = resultOf(design, gates, contestants, timings);
    return { ...result, heldNs, code, agreement, rounds, notes };
  } finally {
    for (const each of native.contestants) each.close();
  }
}

const TABLE_NOTE =
  'table is another algorithm: it looks next states and responses up that have come before, and ' +
  'is what a run of this circuit uses';

function codeFigures(code: OwnEngines['code'], gates: number): CodeFigures {
  const { operations, vectorOperations, bytes } = code;
  const perGate = (count: number): number => fiveDigits(count / Math.max(1, gates));
  return {
    ...code,
    operationsPerGate: perGate(operations + vectorOperations),
    bytesPerGate: perGate(bytes),
  };
}

function resultOf(
  { circuit }: Design,
  gates: number,
  contestants: readonly Contestant[],
  timings: readonly Timing[],
): Omit<BenchResult, 'heldNs' | 'code' | 'agreement' | 'rounds' | 'notes'> {
  const figures = contestants.map(({ name, buildMs }, i): [BenchEngine, EngineFigures] => [
    name,
    { ...timings[i]!, buildMs: fiveDigits(buildMs) },
  ]);
  const engines = Object.fromEntries(figures) as Record<BenchEngine, EngineFigures>;
  const ratios = Object.fromEntries(
    figures
      .filter(([name]) => name !== 'wasm')
      .map(([name, { nsPerCycle }]) => [name, fiveDigits(nsPerCycle / engines.wasm.nsPerCycle)]),
  );
  return {
    circuit: circuit.name,
    gates,
    registers: circuit.registers.count,
    cycles: engines.wasm.cycles,
    engines,
    ratios,
  };
}
