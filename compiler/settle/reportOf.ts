import type { Circuit } from '../circuit/circuit.js';
import { loopsOf } from '../circuit/loops.js';
import { powerUpState } from '../circuit/powerUp.js';
import type { Design } from '../compile.js';
import type { MemberCourse } from './memberCourse.js';
import type { Continuation } from './repetition.js';
import {
  type CourseReport,
  type ElementReport,
  type LanePowerUp,
  type SettleReport,
  verdicts,
} from './settleReport.js';
import type { SettleRun } from './settleRun.js';

/** What a report says beside what was seen in the run. */
export interface ReportContext {
  readonly stimulusCycles: number;
  readonly lanes: number;
  readonly seed: number | bigint;
  readonly notes?: readonly string[];
  /** How many of the last cycles count as the end, where no state has come again; default 1. */
  readonly endCycles?: number;
}

/** The report on a run that is over. */
export function reportOf(design: Design, run: SettleRun, context: ReportContext): SettleReport {
  const { circuit } = design;
  const { stimulusCycles, lanes, notes = [] } = context;
  const seedOf = (lane: number): string =>
    BigInt.asUintN(64, BigInt(context.seed) + BigInt(lane)).toString();
  const elements = elementsOf(design, run, context.endCycles ?? 1);
  const counts = verdicts.map((verdict) => [
    verdict,
    elements.filter((element) => element.verdict === verdict).length,
  ]);
  return {
    circuit: circuit.name,
    cycles: run.cycles,
    stimulusCycles,
    lanes,
    seed: seedOf(0),
    registers: circuit.registers.count,
    latches: circuit.latches.count,
    loopNets: loopsOf(circuit).keptNets.length,
    counts: Object.fromEntries(counts) as SettleReport['counts'],
    unknown: courseReport(run.unknown, run.unknownRepetition),
    differing: courseReport(run.differing, run.laneRepetition),
    elements,
    faults: run.runner.faults.map((fault) => ({ ...fault, seed: seedOf(fault.lane) })),
    powerUps: powerUpsOf(circuit, elements, seedOf),
    notes,
  };
}

interface Seen {
  readonly found: Continuation | undefined;
}

const courseReport = ({ changedAfter, steps }: MemberCourse, { found }: Seen): CourseReport => ({
  unchangedAfter: changedAfter,
  steps,
  ...(found && { held: found }),
});

function elementsOf(
  { circuit, layout }: Design,
  run: SettleRun,
  endCycles: number,
): ElementReport[] {
  const { registers, latches } = circuit;
  const lane = run.runner.firstRunning;
  const laneState = lane < 0 ? undefined : run.runner.stateOf(lane);
  const areCompared = run.runner.lanes - run.runner.faults.length > 1;
  const unknownFrom = startOfEnd(run, run.unknownRepetition, endCycles);
  const differingFrom = startOfEnd(run, run.laneRepetition, endCycles);
  return layout.stateNames.map((name, element): ElementReport => {
    const isLoop = element >= registers.count + latches.count;
    const kind = isLoop ? 'loop' : element >= registers.count ? 'latch' : 'register';
    const knownAfter = run.unknown.last[element]! + 1;
    const agreedAfter = run.differing.last[element]! + 1;
    const witness = run.witnesses[element];
    if (agreedAfter > differingFrom && witness !== undefined) {
      return { name, kind, verdict: 'powerUp', witness };
    }
    if (knownAfter <= unknownFrom) {
      const value = run.state[element]!;
      return { name, kind, verdict: 'known', knownAfter, agreedAfter, value };
    }
    if (!areCompared) return { name, kind, verdict: 'undecided' };
    return { name, kind, verdict: 'agreed', agreedAfter, value: laneState![element]! };
  });
}

// What comes and goes is not the same at every end: where a state repeats, a period is looked at.
function startOfEnd({ cycles }: SettleRun, { found }: Seen, endCycles: number): number {
  const length = found === undefined ? endCycles : found.kind === 'repeats' ? found.period : 1;
  return cycles - length + 1;
}

function powerUpsOf(
  circuit: Circuit,
  elements: readonly ElementReport[],
  seedOf: (lane: number) => string,
): LanePowerUp[] {
  const lanes = new Set(elements.flatMap(({ witness }) => witness?.lanes ?? []));
  return [...lanes]
    .sort((p, q) => p - q)
    .map((lane) => {
      const seed = seedOf(lane);
      return { lane, seed, state: powerUpState(circuit, 'random', BigInt(seed)).join('') };
    });
}
