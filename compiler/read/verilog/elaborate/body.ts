import { PartKind } from '../../../circuit/busParts.js';
import { GateKind } from '../../../circuit/gates.js';
import { GrowableUint32 } from '../../../circuit/growable.js';
import { type NetId, NO_NET } from '../../../circuit/ids.js';
import { depthOf } from '../../../circuit/memory.js';
import type { DiagnosticCode } from '../../../diagnostics/codes.js';
import type { Diagnostic, Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Source } from '../../../diagnostics/source.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../../names.js';
import { REGISTER_LIMIT } from '../behaviour/memorySelect.js';
import { type Budget, tooLarge } from '../budget.js';
import type { Binding, FloatingBit, HeldMemory } from '../scope.js';
import type { Expression, Item, ModuleSyntax, Strength } from '../syntax.js';
import { BlockScope } from './blockScope.js';
import { Children } from './children.js';
import type { Design } from './design.js';
import { imported } from './imports.js';
import { wordSpan } from './messages.js';
import { NeedsRegisters } from './needsRegisters.js';
import { bindingAbove, type Outer, type OuterHost } from './outer.js';
import { Recording } from './recording.js';
import type { Strengths } from './strengths.js';
import { SymbolKind, type SymbolTable } from './symbols.js';
import type { TemplatePort } from './template.js';

/** An item and the scope it stands in. */
export interface Located<Kind extends Item['kind']> {
  readonly scope: BlockScope;
  readonly item: Extract<Item, { kind: Kind }>;
}

/** The value in the declaration of a net or variable. */
export interface DeclaredValue {
  readonly scope: BlockScope;
  readonly target: Expression;
  readonly value: Expression;
  readonly strength?: Strength | undefined;
}

/** An input port of a child that no connection names. */
export interface OpenInput {
  readonly child: number;
  readonly port: TemplatePort;
  /** Index of the instance in the module's table. */
  readonly instance: number;
}

// What a scope and its tables take, in numbers of 32 bits.
const NUMBERS_OF_BLOCK = 350;

/** Value in `ModuleBody.placed` of an instance that could not be placed. */
export const NOT_PLACED = 0xffffffff;

/**
 * A module while it is elaborated for one set of parameter values: its scopes, the work that is
 * left, and the recording of its logic.
 */
export class ModuleBody implements OuterHost {
  readonly design: Design;
  readonly module: ModuleSyntax;
  readonly outer: Outer | undefined;
  readonly builder: Recording;
  readonly children: Children;
  readonly initialValues = new Map<NetId, 0 | 1>();
  readonly blocks: BlockScope[] = [];

  // Work that waits until every name is declared; `#work` has all of these lists.
  readonly assigns: Located<'assign'>[] = [];
  readonly instances: Located<'instances'>[] = [];
  readonly processes: Located<'always'>[] = [];
  readonly initials: Located<'initial'>[] = [];
  readonly defparams: Located<'defparam'>[] = [];
  readonly netValues: DeclaredValue[] = [];
  readonly variableValues: DeclaredValue[] = [];
  readonly #work: readonly unknown[][] = [
    this.assigns,
    this.instances,
    this.processes,
    this.initials,
    this.defparams,
    this.netValues,
    this.variableValues,
  ];
  /** First child of each instance of a module or primitive, by the value of its symbol. */
  readonly placed = new GrowableUint32(2);
  /** Length of the instances that are arrays, by the value of their symbol. */
  arrayLengths: Map<number, number> | undefined;
  /** Drivers of the recording that hand on a net as it is: z too, where that net is a bus. */
  readonly copies = new GrowableUint32(2);

  /** Variables that a process drives in part, once for each process. */
  readonly floatingVariables: NetId[] = [];

  /** Variables that a process copies from a net. */
  readonly copiedVariables: NetId[] = [];

  /** Inputs of instances that nothing is connected to. */
  readonly openInputs: OpenInput[] = [];
  /** Places an instance before its turn, for a name that leads into it. */
  placeEarly: ((instance: number) => void) | undefined;
  /** Own nets by the net of the module around this one that they stand for. */
  readonly outerNets = new Map<NetId, NetId>();
  /** Likewise memories. */
  readonly outerMemories = new Map<HeldMemory, HeldMemory>();
  dependsOnPlace = false;
  hasReals = false;

  /** Positions of the arrays that are to be built from registers, whatever their size. */
  readonly inRegisters: ReadonlySet<Position>;

  constructor(
    design: Design,
    module: ModuleSyntax,
    outer: Outer | undefined,
    inRegisters: ReadonlySet<Position> = new Set(),
  ) {
    this.inRegisters = inRegisters;
    this.design = design;
    this.module = module;
    this.outer = outer;
    this.builder = new Recording(design.budget);
    this.children = new Children(design.budget);
    this.blocks.push(new BlockScope(this, undefined, 0, module.name));
  }

  get names(): NameTable {
    return this.design.names;
  }

  get sources(): SourceMap {
    return this.design.sources;
  }

  get diagnostics(): Diagnostics {
    return this.design.diagnostics;
  }

  get budget(): Budget {
    return this.design.budget;
  }

  get moduleName(): NameId {
    return this.module.name;
  }

  /** How much work there is in each list, for `forgetWork`. */
  workSoFar(): readonly number[] {
    return this.#work.map((list) => list.length);
  }

  /** Takes back the work that came after `workSoFar`: that of a loop without end is pointless. */
  forgetWork(lengths: readonly number[]): void {
    for (const [index, list] of this.#work.entries()) list.length = lengths[index]!;
  }

  /** Lets go of all work once it is done, since bodies are kept for hierarchical names. */
  dropWork(): void {
    for (const list of this.#work) list.length = 0;
  }

  readData(path: string, from: Position): Source | undefined {
    const { source } = this.sources.span(from);
    return this.design.readInclude?.(path, source);
  }

  noteCopy(variable: NetId, net: NetId): void {
    if (!this.builder.isDeclared(net)) return;
    this.copies.push(this.builder.driverCount);
    this.copiedVariables.push(variable);
  }

  driveFloating(net: NetId, bit: FloatingBit): void {
    this.floatingVariables.push(net);
    this.addFloating(net, bit);
  }

  /** Adds a driver to a net that is z while its enable is 0. */
  addFloating(net: NetId, { data, enable }: FloatingBit, strengths?: Strengths): void {
    const { builder, copies } = this;
    const kind = builder.kindOf(enable);
    if (kind === GateKind.Zero) return;
    if (builder.isDeclared(data)) copies.push(builder.driverCount);
    if (kind === GateKind.One && strengths === undefined) builder.drive(net, GateKind.Buf, [data]);
    else {
      const control = kind === GateKind.One ? NO_NET : enable;
      builder.busPart(net, data, control, { kind: PartKind.Driver, ...strengths });
    }
  }

  needRegisters(memory: HeldMemory): void {
    // Registers have one driver, and the other module is it.
    if (memory.isWritten === true) return;
    const { width, indices } = this.builder.memories[memory.number]!;
    if (depthOf(indices) * width <= REGISTER_LIMIT) throw new NeedsRegisters(memory);
  }

  /** The scope of the module itself. */
  get root(): BlockScope {
    return this.blocks[0]!;
  }

  /** A new block inside a scope, under a name that is free there. */
  addBlock(parent: BlockScope, name: NameId, start: Position, end: Position): BlockScope {
    const block = new BlockScope(this, parent, this.blocks.length, name);
    this.enterBlock(block, start, end);
    return block;
  }

  /** Enters a block that was made for the next index into the scope around it. */
  enterBlock(block: BlockScope, start: Position, end: Position): void {
    if (!this.budget.grow(NUMBERS_OF_BLOCK)) throw tooLarge({ start, end });
    const { name, index, parent } = block;
    this.blocks.push(block);
    parent?.symbols.add({ name, kind: SymbolKind.Block, value: index, start, end });
  }

  bindingInside(instance: number, path: readonly NameId[], at: number): Binding | undefined {
    if (instance === NOT_PLACED) return undefined;
    if (this.placed.get(instance) === NOT_PLACED) this.placeEarly?.(instance);
    const child = this.placed.get(instance);
    if (child === NOT_PLACED) return undefined;
    const template = this.design.templates[this.children.template(child)]!;
    const binding = template.scope?.member(path, at);
    return binding && imported(binding, child, template, this.children, this.builder);
  }

  bindingAbove(path: readonly NameId[]): Binding | undefined {
    return bindingAbove(this, path);
  }

  ownNet(outside: NetId): NetId {
    const known = this.outerNets.get(outside);
    if (known !== undefined) return known;
    const net = this.builder.declare(1);
    this.outerNets.set(outside, net);
    return net;
  }

  ownMemory(outside: HeldMemory): HeldMemory {
    const known = this.outerMemories.get(outside);
    if (known !== undefined) return known;
    const { memories } = this.outer!.host.builder;
    const memory = this.builder.farMemory(memories[outside.number]!);
    this.outerMemories.set(outside, memory);
    return memory;
  }

  text(name: NameId): string {
    return this.names.text(name);
  }

  /** How many children an instance has. */
  arrayLength(instance: number): number {
    return this.arrayLengths?.get(instance) ?? 1;
  }

  /** The word that stands at a position: its start and end. */
  wordAt(position: Position): { readonly start: Position; readonly end: Position } {
    const { source, start } = this.sources.span(position);
    const span = wordSpan(source, start);
    return { start: position, end: position + span.end - span.start };
  }

  /** Lets what is recorded next have its origin at a position. */
  buildAt(position: Position): void {
    const index = this.sources.indexOf(position);
    this.builder.at(index, position - this.sources.base(index));
  }

  report(
    code: DiagnosticCode,
    message: string,
    start: Position,
    end: Position,
    related?: Diagnostic['related'],
  ): void {
    this.diagnostics.add(code, message, this.sources.span(start, end), related);
  }

  /** Whether a name is free in a scope; reports it if not. */
  isFree({ symbols }: BlockScope, name: NameId, start: Position, end: Position): boolean {
    if (symbols.find(name) < 0) return true;
    this.reportTaken(symbols, name, start, end);
    return false;
  }

  /** Reports the second declaration of a name. */
  reportTaken(symbols: SymbolTable, name: NameId, start: Position, end: Position): void {
    const taken = symbols.find(name);
    const known = symbols.start(taken);
    const knownSpan =
      symbols.end(taken) > known
        ? this.sources.span(known, symbols.end(taken))
        : this.design.wordSpan(known);
    const own = this.sources.span(start, end);
    // Names are not entered in the order of the text; the later one is to blame.
    const [first, second] = known <= start ? [knownSpan, own] : [own, knownSpan];
    const message = `${this.text(name)} is declared already; remove or rename one of the two`;
    const related = [{ message: 'the first declaration is here', span: first }];
    this.diagnostics.add('name-redeclared', message, second, related);
  }
}
