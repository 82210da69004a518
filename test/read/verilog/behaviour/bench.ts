import { CircuitBuilder } from '../../../../compiler/circuit/builder.js';
import { PartKind, packTraits } from '../../../../compiler/circuit/busParts.js';
import { resolveBuses } from '../../../../compiler/circuit/busResolution.js';
import type { Circuit } from '../../../../compiler/circuit/circuit.js';
import { GateKind } from '../../../../compiler/circuit/gates.js';
import type { NetId } from '../../../../compiler/circuit/ids.js';
import { type Diagnostic, Diagnostics } from '../../../../compiler/diagnostics/diagnostics.js';
import { Source } from '../../../../compiler/diagnostics/source.js';
import { SourceMap } from '../../../../compiler/diagnostics/sourceMap.js';
import type { NameId } from '../../../../compiler/read/names.js';
import {
  evaluateConstant,
  lowerAlways,
  lowerExpression,
  lowerInitial,
  lowerTarget,
} from '../../../../compiler/read/verilog/behaviour/index.js';
import { Budget } from '../../../../compiler/read/verilog/budget.js';
import { parseVerilog } from '../../../../compiler/read/verilog/parse.js';
import type { Binding, Elaboration, Scope } from '../../../../compiler/read/verilog/scope.js';
import type {
  DeclarationItem,
  Expression,
  Item,
  RangeSyntax,
  Statement,
} from '../../../../compiler/read/verilog/syntax.js';
import { Simulation } from './simulation.js';

/** One module's names, for tests of behaviour apart from hierarchy. */
class ModuleScope implements Scope {
  readonly shared: Elaboration;
  readonly names = new Map<NameId, Binding>();
  readonly blocks = new Map<NameId, ModuleScope>();
  readonly #outer: ModuleScope | undefined;

  constructor(shared: Elaboration, outer?: ModuleScope) {
    this.shared = shared;
    this.#outer = outer;
  }

  resolve(path: readonly NameId[]): Binding | undefined {
    if (path.length !== 1) return undefined;
    return this.names.get(path[0]!) ?? this.#outer?.resolve(path);
  }

  block(name: NameId): ModuleScope | undefined {
    return this.blocks.get(name);
  }
}

/** A module read from the text of its items, and the circuit of its behaviour. */
export interface Bench {
  readonly diagnostics: readonly Diagnostic[];
  readonly circuit: Circuit;
  readonly initialValues: ReadonlyMap<NetId, 0 | 1>;
  /** Nets of a signal by name, least significant first. */
  nets(name: string): readonly NetId[];
  simulate(): Simulation;
}

/** Builds a module out of declarations, parameters, routines, assigns, initials and always. */
export function bench(items: string): Bench {
  const source = new Source('test.v', `module test;\n${items}\nendmodule\n`);
  const sources = new SourceMap();
  const diagnostics = new Diagnostics();
  const syntax = parseVerilog([source], {}, sources, diagnostics);
  const builder = new CircuitBuilder();
  builder.addSource(source);
  const floating = new Set<NetId>();
  const shared: Elaboration = {
    builder,
    names: syntax.names,
    sources,
    diagnostics,
    budget: new Budget(),
    initialValues: new Map(),
    driveFloating: (net, { data, enable }) => {
      floating.add(net);
      builder.busPart(net, data, enable, packTraits({ kind: PartKind.Driver }));
    },
  };
  const scope = new ModuleScope(shared);
  const module = syntax.modules[0]!;
  for (const item of module.items) declare(item, scope, builder);
  for (const item of module.items) if (item.kind === 'initial') lowerInitial(item, scope);
  for (const item of module.items) build(item, scope);
  for (const [net, value] of shared.initialValues) {
    const kind = value === 1 ? GateKind.One : GateKind.Zero;
    if (!floating.has(net) && !builder.isDriven(net)) builder.drive(net, kind, []);
  }
  resolveBuses(builder);
  const circuit = builder.finish('test');
  const nets = (name: string): readonly NetId[] => {
    const binding = scope.resolve([syntax.names.internText(name)]);
    if (binding?.kind !== 'signal') throw new RangeError(`no signal ${name}`);
    return binding.nets;
  };
  return {
    diagnostics: diagnostics.list,
    circuit,
    initialValues: shared.initialValues,
    nets,
    simulate: () => new Simulation(circuit, nets),
  };
}

function declare(item: Item, scope: ModuleScope, builder: CircuitBuilder): void {
  if (item.kind === 'parameter') {
    for (const { name, value } of item.values) {
      const constant = evaluateConstant(value, scope);
      if (constant === undefined) continue;
      const range = rangeOf(item.range, scope) ?? { msb: constant.width - 1, lsb: 0 };
      scope.names.set(name, { kind: 'parameter', value: constant, ...range });
    }
  } else if (item.kind === 'function' || item.kind === 'task') {
    scope.names.set(item.name, { kind: 'routine', syntax: item, scope });
  } else if (item.kind === 'declaration') {
    declareSignals(item, scope, builder);
  } else if (item.kind === 'always' || item.kind === 'initial') {
    declareBlocks(item.body, scope, builder);
  }
}

function declareSignals(item: DeclarationItem, scope: ModuleScope, builder: CircuitBuilder): void {
  const isVariable = item.type === 'reg' || item.type === 'integer' || item.type === 'time';
  const range = item.type === 'integer' ? { msb: 31, lsb: 0 } : rangeOf(item.range, scope);
  const { msb, lsb } = range ?? { msb: 0, lsb: 0 };
  const word = () => Array.from({ length: Math.abs(msb - lsb) + 1 }, () => builder.net());
  const signed = item.signed || item.type === 'integer';
  for (const { name, dimensions } of item.names) {
    if (dimensions[0] !== undefined) {
      const bounds = rangeOf(dimensions[0], scope)!;
      const low = Math.min(bounds.msb, bounds.lsb);
      const high = Math.max(bounds.msb, bounds.lsb);
      const words = Array.from({ length: high - low + 1 }, word);
      const indices = [{ low, high }];
      const shape = { name, msb, lsb, signed, isVariable, indices, words };
      scope.names.set(name, { kind: 'memory', ...shape });
      continue;
    }
    const nets = word();
    const isVector = range !== undefined;
    scope.names.set(name, { kind: 'signal', name, msb, lsb, isVector, signed, isVariable, nets });
    if (item.direction === 'input') builder.input(scope.shared.names.text(name), nets);
  }
}

function declareBlocks(statement: Statement, scope: ModuleScope, builder: CircuitBuilder): void {
  let inner = scope;
  if (statement.kind === 'block' && statement.name !== 0) {
    inner = new ModuleScope(scope.shared, scope);
    scope.blocks.set(statement.name, inner);
    for (const item of statement.declarations) declare(item, inner, builder);
  }
  for (const part of Object.values(statement)) {
    for (const child of Array.isArray(part) ? part : [part]) {
      if (typeof child === 'object' && child !== null) {
        declareBlocks(child as Statement, inner, builder);
      }
    }
  }
}

function rangeOf(range: RangeSyntax | undefined, scope: Scope) {
  if (range === undefined) return undefined;
  const number = (expression: Expression): number => {
    const { value, width, signed } = evaluateConstant(expression, scope)!;
    return Number(signed ? BigInt.asIntN(width, value) : value);
  };
  return { msb: number(range.left), lsb: number(range.right) };
}

function build(item: Item, scope: Scope): void {
  if (item.kind === 'always') lowerAlways(item, scope);
  else if (item.kind === 'assign') {
    const target = lowerTarget(item.target, scope);
    if (target === undefined) return;
    const value = lowerExpression(item.value, scope, target.length);
    target.forEach((net, i) => {
      scope.shared.builder.drive(net, GateKind.Buf, [value[i]!]);
    });
  }
}

/** What the constant of `parameter P = …;` is, after other items; width, sign and bits. */
export function constantOf(text: string, items = '') {
  const source = new Source(
    'test.v',
    `module test;\n${items}\nparameter P = ${text};\nendmodule\n`,
  );
  const sources = new SourceMap();
  const diagnostics = new Diagnostics();
  const syntax = parseVerilog([source], {}, sources, diagnostics);
  const builder = new CircuitBuilder();
  const { names } = syntax;
  const budget = new Budget();
  const shared = { builder, names, sources, diagnostics, budget, initialValues: new Map() };
  const scope = new ModuleScope(shared);
  for (const item of syntax.modules[0]!.items) declare(item, scope, builder);
  const binding = scope.resolve([names.internText('P')]);
  const constant = binding?.kind === 'parameter' ? binding.value : undefined;
  return { constant, diagnostics: diagnostics.list };
}

/** A constant as text: width, `s` if signed, and its bits with `x`. */
export function constantText(text: string, items = ''): string {
  const { constant, diagnostics } = constantOf(text, items);
  if (constant === undefined) return diagnostics.map(({ message }) => message).join('; ');
  const { width, signed, value, unknown } = constant;
  const bits = Array.from({ length: width }, (_, i) => {
    const place = BigInt(width - 1 - i);
    return (unknown >> place) & 1n ? 'x' : String((value >> place) & 1n);
  });
  return `${width}'${signed ? 's' : ''}b${bits.join('')}`;
}

/** Code, and text at the place, of the errors and warnings of a module. */
export function problemsOf(items: string): { code: string; at: string; message: string }[] {
  return bench(items).diagnostics.map(({ code, span, message }) => ({
    code,
    at: span === undefined ? '' : span.source.slice(span.start, span.end),
    message,
  }));
}
