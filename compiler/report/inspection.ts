import { clockRootsOf } from '../circuit/analyses/clockRoots.js';
import { gatesByLevel, registersByDepth } from '../circuit/analyses/depthCounts.js';
import { leafInstances } from '../circuit/analyses/leafInstances.js';
import { GateKind, gateInfo, isGate } from '../circuit/gates.js';
import { levelsOf } from '../circuit/levels.js';
import { loopsOf } from '../circuit/loops.js';
import type { Design } from '../compile.js';
import type { Diagnostic } from '../diagnostics/diagnostics.js';
import { type ClockSummary, clockSummaries } from './inspect/clockSummary.js';
import { type Fanout, largestFanouts } from './inspect/fanoutSummary.js';
import { loopSummaries } from './inspect/loopSummary.js';
import { type MachineSummary, machineSummaries } from './inspect/machineSummary.js';
import { type MemorySummary, memorySummaries } from './inspect/memorySummary.js';
import { NetWords } from './inspect/netWords.js';
import { deepestSteps, type PathStep } from './inspect/pathSummary.js';
import { findProblems } from './inspect/problems/findProblems.js';
import { type StateSummary, stateSummary } from './inspect/stateSummary.js';

/** A problem of a netlist, as `inspect --json` prints it. Line and column count from 1. */
export interface Problem {
  readonly severity: string;
  readonly code: string;
  readonly message: string;
  readonly file?: string;
  readonly line?: number;
  readonly column?: number;
}

/** What `inspect` tells of a netlist; printed as it stands by `--json`. */
export interface Inspection {
  readonly top: string;
  /** Data inputs; clock ports are listed under `clocks`. */
  readonly inputs: readonly { readonly name: string; readonly width: number }[];
  readonly outputs: readonly { readonly name: string; readonly width: number }[];
  readonly clocks: readonly ClockSummary[];
  /** Inputs that reach clock pins through gates and are data: enables of gated clocks. */
  readonly clockEnables: readonly string[];
  readonly gates: number;
  /** Most frequent first, as in `cells`. */
  readonly gatesByKind: Readonly<Record<string, number>>;
  /** Instances of modules that contain no other. */
  readonly cells: Readonly<Record<string, number>>;
  readonly registers: number;
  readonly latches: number;
  /** Words that are held as a memory; small memories are among the registers. */
  readonly memories: readonly MemorySummary[];
  readonly state: StateSummary;
  /** Registers whose values have names. */
  readonly machines: readonly MachineSummary[];
  /** Combinational loops, those through open latches included. */
  readonly loops: number;
  /** Of the first hundred loops, the nets of a shortest way round. */
  readonly loopNets: readonly (readonly string[])[];
  /** Gates on the longest path between inputs or registers and registers or outputs. */
  readonly depth: number;
  /** Gates on each level; entry 0 counts those on or behind a loop, which have no level. */
  readonly levels: readonly number[];
  /** Registers by the number of gates on the longest path to their data from any register. */
  readonly registerDepths: readonly number[];
  /** From its source to what it ends at; empty where there are no gates. */
  readonly deepestPath: readonly PathStep[];
  /** The eight nets with most readers. */
  readonly fanouts: readonly Fanout[];
  readonly problems: readonly Problem[];
}

const MOST_LOOPS = 100;

/** Looks a design over. `found` is what reading it had to say. */
export function inspect(design: Design, found: readonly Diagnostic[]): Inspection {
  const { circuit, clocks, layout } = design;
  const words = new NetWords(circuit);
  const roots = clockRootsOf(circuit, clocks);
  const level = levelsOf(circuit);
  const levels = Array.from(gatesByLevel(circuit, level));
  const kinds = gatesByKind(circuit.kind);
  return {
    top: circuit.name,
    inputs: layout.inputs.ports.map(({ name, width }) => ({ name, width })),
    outputs: circuit.outputs.map(({ name, nets }) => ({ name, width: nets.length })),
    clocks: clockSummaries(design, roots, words),
    clockEnables: clocks.gating,
    gates: kinds.reduce((sum, [, count]) => sum + count, 0),
    gatesByKind: Object.fromEntries(kinds),
    cells: Object.fromEntries(leafInstances(circuit.hierarchy)),
    registers: circuit.registers.count,
    latches: circuit.latches.count,
    memories: memorySummaries(design, roots),
    state: stateSummary(circuit),
    machines: machineSummaries(circuit),
    loops: loopsOf(circuit).nets.length,
    loopNets: loopSummaries(circuit, MOST_LOOPS).map(({ path }) =>
      path.map((net) => words.name(net)),
    ),
    depth: levels.length - 1,
    levels,
    registerDepths: Array.from(registersByDepth(circuit, level)),
    deepestPath: deepestSteps(circuit, level, words),
    fanouts: largestFanouts(circuit, words),
    problems: [...found, ...findProblems({ design, roots, words })].map(problemOf),
  };
}

/** A diagnostic in the form that `--json` prints. */
export function problemOf({ severity, code, message, span }: Diagnostic): Problem {
  if (span === undefined) return { severity, code, message };
  const { line, column } = span.source.place(span.start);
  return { severity, code, message, file: span.source.path, line, column };
}

function gatesByKind(kinds: Uint8Array): (readonly [string, number])[] {
  const counts = new Uint32Array(256);
  for (const kind of kinds) counts[kind]!++;
  return Array.from(counts.entries())
    .filter(([kind, count]) => isGate(kind) && kind !== GateKind.MemoryRead && count > 0)
    .map(([kind, count]) => [gateInfo(kind).name, count] as const)
    .sort(([, p], [, q]) => q - p);
}
