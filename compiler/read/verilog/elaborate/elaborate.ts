import { CircuitBuilder } from '../../../circuit/builder.js';
import { type BusProblem, resolveBuses } from '../../../circuit/busResolution.js';
import type { Circuit } from '../../../circuit/circuit.js';
import { dropSpare } from '../../../circuit/numberLists.js';
import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Source } from '../../../diagnostics/source.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import { type Allowance, BudgetExceeded } from '../budget.js';
import type { ModuleSyntax, VerilogSyntax } from '../syntax.js';
import { assumedSupplies } from './assumedSupplies.js';
import { addBoxPorts } from './boxPorts.js';
import { compileBox } from './compileBox.js';
import { compileModule } from './compileModule.js';
import { isWired } from './defaults.js';
import { Design, NO_TEMPLATE } from './design.js';
import type { LibraryCell } from './libraryCell.js';
import { DistinctDiagnostics, wordSpan } from './messages.js';
import { NeedsRegisters } from './needsRegisters.js';
import { noOverrides } from './overrides.js';
import { compilePrimitive } from './primitives.js';
import { withReplacements } from './replacements.js';
import { Stamper } from './stamp.js';
import type { Template } from './template.js';
import { chooseTop } from './top.js';
import { addTopPorts, checkTopPorts } from './topPorts.js';
import { withoutCopies } from './withoutCopies.js';

/** What `elaborate` may be told. */
export interface ElaborateOptions {
  /** Name of the top module; chosen by itself where only one can be meant. */
  readonly top?: string;
  /** Cells of libraries in other forms, in the order of their files. */
  readonly cells?: readonly LibraryCell[];
  /** Names of modules whose instances become ports of the circuit, see `addBoxPorts`. */
  readonly blackBoxes?: readonly string[];
  /** By the name of a module the source that its definition is taken from, see `readNetlist`. */
  readonly replacements?: ReadonlyMap<string, Source>;
  /** What a text may take to elaborate; generous unless given. */
  readonly allowance?: Allowance;
  /** Bits from which on arrays are held as memories. */
  readonly memoriesFrom?: number | undefined;
  /** Finds data files of memories, see `PreprocessOptions`. */
  readonly readInclude?: (path: string, from: Source) => Source | undefined;
}

/**
 * Builds the circuit that a Verilog text describes: parameters set, generate constructs and
 * arrays expanded, instances flattened (IEEE 1364-2005, clause 12).
 *
 * Each module is compiled once for each set of parameter values and then stamped into the circuit
 * for every instance. A connected port is one net with what it is connected to. `sources` must be
 * the map that `syntax` was read with; `syntax` is used up. Returns undefined if anything is wrong,
 * after reporting it.
 */
export function elaborate(
  syntax: VerilogSyntax,
  options: ElaborateOptions,
  sources: SourceMap,
  diagnostics: Diagnostics,
): Circuit | undefined {
  const inRegisters = new Set<Position>();
  for (;;) {
    const found = new DistinctDiagnostics();
    try {
      const circuit = elaborateWith(inRegisters, syntax, options, sources, found);
      for (const { code, message, span, related } of found.list) {
        diagnostics.add(code, message, span, related);
      }
      return circuit;
    } catch (error) {
      if (!(error instanceof NeedsRegisters)) throw error;
      inRegisters.add(error.position);
    } finally {
      dropSpare();
    }
  }
}

function elaborateWith(
  inRegisters: ReadonlySet<Position>,
  syntax: VerilogSyntax,
  options: ElaborateOptions,
  sources: SourceMap,
  found: Diagnostics,
): Circuit | undefined {
  const makers = { module: compileModule, primitive: compilePrimitive, box: compileBox };
  const {
    blackBoxes = [],
    replacements = new Map(),
    cells = [],
    readInclude,
    memoriesFrom,
    allowance,
  } = options;
  const replaced = withReplacements(
    withoutCopies(syntax, sources),
    cells,
    replacements,
    sources,
    found,
  );
  const design = new Design(replaced.syntax, sources, found, makers, {
    ...replaced,
    blackBoxes,
    allowance,
    readInclude,
    memoriesFrom,
    inRegisters,
  });
  return withinBudget(design, () => build(design, options.top));
}

/** What `work` gives, or undefined and a report where it would take too much. */
function withinBudget<T>({ diagnostics, sources }: Design, work: () => T): T | undefined {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof BudgetExceeded)) throw error;
    const { place, message } = error;
    const span =
      'start' in place
        ? sources.span(place.start, place.end)
        : wordSpan(sources.sources[place.source]!, place.offset);
    diagnostics.add('design-too-large', message, span);
    return undefined;
  }
}

function build(design: Design, wanted: string | undefined): Circuit | undefined {
  const module = chooseTop(design, wanted);
  if (module === undefined) return undefined;
  const index = design.template(module.name, noOverrides, module.nameStart);
  design.unknown.report();
  design.shadowed.report();
  design.absentSupplies.report(design.diagnostics);
  if (index === NO_TEMPLATE) return undefined;
  const top = design.templates[index]!;
  const supplies = assumedSupplies(design, top);
  for (const net of supplies.keys()) design.driven.add(top, net);
  design.finish();
  checkBlackBoxes(design, module);
  checkTopPorts(design, module, top);
  // What a missing module or anything faulty would drive is not known.
  if (design.unknown.isEmpty && !design.diagnostics.hasErrors) {
    design.undriven.report(
      design.diagnostics,
      (more) => `${more} more nets are read but have no driver`,
    );
  }
  if (design.diagnostics.hasErrors) return undefined;
  // Only compiling their module has needed them.
  for (const { instances } of design.modules) instances.release();
  const builder = new CircuitBuilder(design.netsOf(index) + SOME, design.names.texts);
  reserveNames(builder, design, top);
  for (const source of design.sources.sources) builder.addSource(source);
  const stamper = new Stamper(builder, design.templates);
  const boundary = stamper.stamp(top, supplies);
  addTopPorts(builder, design, module, top, boundary, (net) => stamper.constants.of(net));
  addBoxPorts(builder, design, stamper.boxes);
  reportLateDrivers(design, builder);
  if (!design.diagnostics.hasErrors) reportBuses(design, resolveBuses(builder));
  return design.diagnostics.hasErrors ? undefined : builder.finish(top.name);
}

// Nets that are made beside those of modules, for buses.
const SOME = 1024;

/** Makes room for the names of a flat netlist. */
function reserveNames({ hierarchy }: CircuitBuilder, { templates }: Design, top: Template): void {
  let scopes = top.blocks.length;
  let bits = top.blocks.reduce((sum, { nets }) => sum + nets.length, 0);
  for (let child = 0; child < top.children.count; child++) {
    const { blocks } = templates[top.children.template(child)]!;
    scopes += blocks.length;
    for (const { nets } of blocks) bits += nets.length;
  }
  hierarchy.reserve(scopes, bits);
}

function checkBlackBoxes(design: Design, top: ModuleSyntax): void {
  const used = new Set(design.templates.filter(({ isBox }) => isBox).map(({ name }) => name));
  for (const name of design.blackBoxes) {
    const text = design.text(name);
    if (used.has(text) && name !== top.name) continue;
    const message = `no instance of a module ${text} is in the design, so that it can be no black box`;
    design.diagnostics.add('choice-unknown', message);
  }
}

// Conflicts are found module by module; only what a hierarchical name drives inside an instance
// can meet another driver as late as here.
function reportLateDrivers(design: Design, builder: CircuitBuilder): void {
  for (const { net, sourceIndex, offset } of builder.extraDrivers) {
    if (isWired(builder.netType(net))) continue;
    const span = wordSpan(design.sources.sources[sourceIndex]!, offset);
    const first = builder.originOf(net);
    const related = first && [{ message: 'also driven here', span: first }];
    const message = 'a second driver of a net that has one inside an instance; leave one of them';
    design.diagnostics.add('net-multiply-driven', message, span, related);
  }
}

const busProblems: Readonly<Record<BusProblem['kind'], string>> = {
  bothDriven:
    'both sides of this switch have drivers, so that it may drive either one; ' +
    'write a tri-state driver (bufif1, or assign with z) for each direction in its place',
  ring:
    'switches let the drivers of one another through in a ring; ' +
    'write tri-state drivers (bufif1, or assign with z) in their place',
  charge:
    'a switch connects two nets that store their value, so that capacitances decide; ' +
    'put a buffer in front of it',
};

function reportBuses({ diagnostics, sources }: Design, problems: readonly BusProblem[]): void {
  for (const { kind, sourceIndex, offset } of problems) {
    const span = wordSpan(sources.sources[sourceIndex]!, offset);
    diagnostics.add('not-supported', busProblems[kind], span);
  }
}
