import type { Design } from '../compile.js';
import type { Circuit, Port } from '../circuit/circuit.js';
import { directSources, NOT_DIRECT } from '../circuit/directSources.js';
import { gateInfo, isGate } from '../circuit/gates.js';
import { levelsOf } from '../circuit/levels.js';
import { loopsOf } from '../circuit/loops.js';
import { describeNets } from '../circuit/netPlaces.js';
import type { Diagnostic } from '../diagnostics/diagnostics.js';
import { Diagnostics } from '../diagnostics/diagnostics.js';

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
  /** Clock ports, with the registers that each reaches directly or through gates. */
  readonly clocks: readonly { readonly port: string; readonly registers: number }[];
  readonly gates: number;
  readonly gatesByKind: Readonly<Record<string, number>>;
  readonly registers: number;
  readonly latches: number;
  /** Combinational loops, those through open latches included. */
  readonly loops: number;
  /** Gates on the longest path between inputs or registers and registers or outputs. */
  readonly depth: number;
  readonly problems: readonly Problem[];
}

/** Looks a design over. `found` is what reading it had to say. */
export function inspect(design: Design, found: readonly Diagnostic[]): Inspection {
  const { circuit, layout } = design;
  const gatesByKind: Record<string, number> = {};
  let gates = 0;
  for (const kind of circuit.kind) {
    if (!isGate(kind)) continue;
    const { name } = gateInfo(kind);
    gatesByKind[name] = (gatesByKind[name] ?? 0) + 1;
    gates++;
  }
  const loops = loopsOf(circuit).nets;
  const depth = levelsOf(circuit).reduce((most, level) => Math.max(most, level), 0);
  return {
    top: circuit.name,
    inputs: layout.inputs.ports.map(({ name, width }) => ({ name, width })),
    outputs: circuit.outputs.map((port: Port) => ({ name: port.name, width: port.nets.length })),
    clocks: clockedRegisters(design),
    gates,
    gatesByKind,
    registers: circuit.registers.count,
    latches: circuit.latches.count,
    loops: loops.length,
    depth,
    problems: [...found, ...structuralProblems(circuit, loops)].map(problemOf),
  };
}

/** A diagnostic in the form that `--json` prints. */
export function problemOf({ severity, code, message, span }: Diagnostic): Problem {
  if (span === undefined) return { severity, code, message };
  const { line, column } = span.source.place(span.start);
  return { severity, code, message, file: span.source.path, line, column };
}

function clockedRegisters({ circuit, clocks }: Design): { port: string; registers: number }[] {
  const direct = directSources(circuit);
  const byNet = new Map<number, number>();
  for (const pin of circuit.registers.clock) {
    const source = direct[pin]!;
    if (source === NOT_DIRECT) continue;
    byNet.set(source >>> 1, (byNet.get(source >>> 1) ?? 0) + 1);
  }
  return clocks.ports.map(({ name, net }) => ({ port: name, registers: byNet.get(net) ?? 0 }));
}

function structuralProblems(circuit: Circuit, loops: readonly Uint32Array[]): Diagnostic[] {
  const diagnostics = new Diagnostics();
  for (const nets of loops) {
    const source = circuit.sources[circuit.originSource[nets[0]!]!];
    const start = circuit.originOffset[nets[0]!]!;
    diagnostics.add(
      'combinational-loop',
      `${nets.length} nets feed back to themselves without a register: ${describeNets(circuit, nets)}`,
      source && { source, start, end: start },
    );
  }
  return diagnostics.list;
}
