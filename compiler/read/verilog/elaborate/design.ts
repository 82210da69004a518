import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Source, Span } from '../../../diagnostics/source.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../../names.js';
import { type Allowance, Budget, BudgetExceeded, tooLarge } from '../budget.js';
import type { ModuleSyntax, PrimitiveSyntax, VerilogSyntax } from '../syntax.js';
import { AbsentSupplies } from './absentSupplies.js';
import { DrivenNets } from './drivenNets.js';
import { HELD_FROM } from './heldFrom.js';
import type { LibraryCell } from './libraryCell.js';
import { LimitedReport, wordSpan } from './messages.js';
import { NameIndex } from './nameIndex.js';
import type { Outer } from './outer.js';
import { noOverrides, type Overrides, overridesKey } from './overrides.js';
import { type Shadowed, ShadowedModels } from './shadowedModels.js';
import type { Template } from './template.js';
import { Totals } from './totals.js';
import { UnknownModules } from './unknownModules.js';

/** What an instance can name. */
export type Definition = ModuleSyntax | PrimitiveSyntax | LibraryCell;

/** How the templates of a design are made. */
export interface TemplateMakers {
  module(
    design: Design,
    module: ModuleSyntax,
    overrides: Overrides,
    outer: Outer | undefined,
  ): Template;
  primitive(design: Design, primitive: PrimitiveSyntax): Template;
  box(design: Design, definition: Definition, overrides: Overrides, place: Position): Template;
}

/** What belongs to a design beside its syntax. */
export interface DesignChoice {
  readonly cells?: readonly LibraryCell[];
  readonly dropped?: readonly ModuleSyntax[];
  readonly blackBoxes?: readonly string[];
  readonly allowance?: Allowance | undefined;
  /** Bits from which on arrays are held as memories; `HELD_FROM` unless given. */
  readonly memoriesFrom?: number | undefined;
  /** Positions of arrays that are to be built from registers, whatever their size. */
  readonly inRegisters?: ReadonlySet<Position>;
  /** Finds the file that a text in a source names; undefined if there is none. */
  readonly readInclude?: ((path: string, from: Source) => Source | undefined) | undefined;
}

/** Value of `Design.template` where there is none because of an error. */
export const NO_TEMPLATE = -1;

// Deeper than any design; a recursion whose parameters never settle is stopped here.
const MAX_DEPTH = 300;
const MAX_UNDRIVEN = 50;

/** Levels of `Budget` that an instance counts as. */
const LEVELS_OF_INSTANCE = 2;

// What a template and its tables take, in numbers of 32 bits.
const NUMBERS_OF_TEMPLATE = 4000;

/** All modules, primitives and library cells by name, and the templates made of them so far. */
export class Design {
  readonly names: NameTable;
  readonly sources: SourceMap;
  readonly diagnostics: Diagnostics;
  readonly budget: Budget;
  readonly modules: readonly ModuleSyntax[];
  readonly primitives: readonly PrimitiveSyntax[];
  readonly cells: readonly LibraryCell[];
  /** See `DesignChoice`. */
  readonly readInclude: DesignChoice['readInclude'];
  readonly memoriesFrom: number;
  readonly inRegisters: ReadonlySet<Position>;
  /** Modules that others have replaced. */
  readonly dropped: readonly ModuleSyntax[];
  /** Names of modules that instances are not to have the inside of. */
  readonly blackBoxes: ReadonlySet<NameId>;
  readonly templates: Template[] = [];
  readonly driven = new DrivenNets(this.templates);
  readonly unknown: UnknownModules;
  readonly undriven: LimitedReport;
  readonly shadowed: ShadowedModels;
  readonly absentSupplies = new AbsentSupplies();
  readonly #makers: TemplateMakers;
  /** Index into `modules` by name, or into `primitives` and then `cells` beyond them. */
  readonly #definition = new NameIndex(64);
  /** Template of each definition without overrides, + 1; 0 for none yet. */
  readonly #plain: Int32Array;
  /** Per definition: another one of the same name that does not count. */
  readonly #twins = new Map<number, Shadowed>();
  readonly #specialised = new Map<string, number>();
  readonly #parameters = new Map<NameId, readonly NameId[]>();
  readonly #totals: Totals;
  readonly #atEnd: (() => void)[] = [];
  readonly #open: { readonly key: string; readonly module: ModuleSyntax }[] = [];

  constructor(
    syntax: VerilogSyntax,
    sources: SourceMap,
    diagnostics: Diagnostics,
    makers: TemplateMakers,
    choice: DesignChoice = {},
  ) {
    const {
      cells = [],
      dropped = [],
      blackBoxes = [],
      allowance,
      readInclude,
      memoriesFrom = HELD_FROM,
      inRegisters = new Set(),
    } = choice;
    this.inRegisters = inRegisters;
    this.memoriesFrom = memoriesFrom;
    this.readInclude = readInclude;
    this.names = syntax.names;
    this.sources = sources;
    this.diagnostics = diagnostics;
    this.budget = new Budget(sources.length, allowance);
    this.#totals = new Totals(this.templates, sources.length);
    this.modules = syntax.modules;
    this.primitives = syntax.primitives;
    this.cells = cells;
    this.dropped = dropped;
    this.blackBoxes = new Set(blackBoxes.map((name) => syntax.names.internText(name)));
    this.#makers = makers;
    this.unknown = new UnknownModules(this);
    this.undriven = new LimitedReport('net-undriven', MAX_UNDRIVEN);
    this.shadowed = new ShadowedModels(this);
    const definitions: Definition[] = [...this.modules, ...this.primitives, ...cells];
    this.#plain = new Int32Array(definitions.length);
    for (const [index, definition] of definitions.entries()) this.#define(definition, index);
  }

  /** The module, primitive or library cell with a name. */
  definition(name: NameId): Definition | undefined {
    const index = this.#definition.get(name);
    return index < 0 ? undefined : this.#at(index);
  }

  /** The template of a module, primitive or cell without overrides if it is made; else -1. */
  plain(name: NameId): number {
    const index = this.#definition.get(name);
    return index < 0 ? -1 : this.#plain[index]! - 1;
  }

  /** Whether the instances of a definition have names in the circuit. */
  makesScope(name: NameId): boolean {
    return !this.isPrimitive(name) || this.blackBoxes.has(name);
  }

  isPrimitive(name: NameId): boolean {
    const { modules, primitives } = this;
    const place = this.#definition.get(name) - modules.length;
    return place >= 0 && place < primitives.length;
  }

  /**
   * Index of the template of a module or primitive with the given parameter values, made when
   * first asked for, and anew where it has names that lead out of it: these depend on `outer`, the
   * place of the instance. `NO_TEMPLATE` where the module contains itself, which is reported at
   * `place`. The name must be defined.
   */
  template(name: NameId, overrides: Overrides, place: Position, outer?: Outer): number {
    const index = this.#definition.get(name);
    const key = overridesKey(overrides);
    const fullKey = key === '' ? `${index}` : `${index} ${key}`;
    const known = key === '' ? this.#plain[index]! - 1 : this.#specialised.get(fullKey);
    if (known !== undefined && known !== NO_TEMPLATE) return known;
    const made = this.#make(index, fullKey, key === '' ? noOverrides : overrides, place, outer);
    if (made !== NO_TEMPLATE && key !== '' && !this.budget.grow(NUMBERS_OF_TEMPLATE)) {
      throw tooLarge(this.#placed(place));
    }
    if (this.templates[made]?.outerNets !== undefined) return made;
    if (key === '') this.#plain[index] = made + 1;
    else this.#specialised.set(fullKey, made);
    return made;
  }

  /** The nets of a template with those of all instances inside it. */
  netsOf(template: number): number {
    return this.#totals.nets(template);
  }

  /** Lets something be done once all modules of the design are compiled. */
  atEnd(action: () => void): void {
    this.#atEnd.push(action);
  }

  /** Does what was put off; to be called when all modules are compiled. */
  finish(): void {
    for (const action of this.#atEnd) action();
  }

  /** The parameters of a module that an instance may set, in the order of their declaration. */
  parametersOf(name: NameId): readonly NameId[] {
    const known = this.#parameters.get(name);
    if (known !== undefined) return known;
    const definition = this.definition(name);
    const items = definition !== undefined && 'items' in definition ? definition.items : [];
    const parameters = items.flatMap((item) =>
      item.kind === 'parameter' && !item.local ? item.values.map((value) => value.name) : [],
    );
    this.#parameters.set(name, parameters);
    return parameters;
  }

  text(name: NameId): string {
    return this.names.text(name);
  }

  *definitionNames(): Iterable<string> {
    for (const list of [this.modules, this.primitives, this.cells]) {
      for (const { name } of list) yield this.text(name);
    }
  }

  /** The span of the word that stands at a position. */
  wordSpan(position: Position): Span {
    const { source, start } = this.sources.span(position);
    return wordSpan(source, start);
  }

  #make(
    index: number,
    key: string,
    overrides: Overrides,
    place: Position,
    outer: Outer | undefined,
  ): number {
    const definition = this.#at(index);
    const twin = this.#twins.get(index);
    if (twin !== undefined) this.shadowed.add(twin);
    if (this.blackBoxes.has(definition.name)) {
      return this.add(this.#makers.box(this, definition, overrides, place), definition);
    }
    if ('template' in definition) {
      return this.add(definition.template(this, place), definition);
    }
    if (!('items' in definition)) {
      return this.add(this.#makers.primitive(this, definition), definition);
    }
    if (this.#isEndless(definition, key, place)) return NO_TEMPLATE;
    this.#open.push({ key, module: definition });
    this.budget.enter(this.#placed(place), 0, LEVELS_OF_INSTANCE);
    const template = this.#makers.module(this, definition, overrides, outer);
    this.budget.leave(LEVELS_OF_INSTANCE);
    this.#open.pop();
    return this.add(template, definition);
  }

  /** Adds a template, which is that of a definition at `nameStart`; returns its index. */
  add(template: Template, { nameStart }: Pick<Definition, 'nameStart'>): number {
    this.templates.push(template);
    const nets = this.#totals.add();
    if (nets === undefined) return this.templates.length - 1;
    const message =
      `${template.name} is too large to be built: with all instances inside it, it has ${nets} nets; ` +
      'take a part of the design as top, or leave modules out as black boxes';
    throw new BudgetExceeded(message, this.#placed(nameStart));
  }

  #placed(position: Position): { readonly start: Position; readonly end: Position } {
    const { start, end } = this.wordSpan(position);
    return { start: position, end: position + end - start };
  }

  #isEndless(module: ModuleSyntax, key: string, place: Position): boolean {
    const again = this.#open.findIndex((each) => each.key === key);
    if (again < 0 && this.#open.length < MAX_DEPTH) return false;
    const cycle = this.#open.slice(Math.max(again, 0), Math.max(again, 0) + 20);
    const names = cycle.map((each) => this.text(each.module.name));
    const path = [...names, this.text(module.name)].join(' > ');
    const isRecursive = this.#open.some((each) => each.module === module);
    const message = isRecursive
      ? `module ${this.text(module.name)} contains itself: ${path}`
      : `instances are nested ${MAX_DEPTH} deep here, more than can be built: ${names.join(' > ')} > …`;
    const code = isRecursive ? 'module-recursive' : 'design-too-large';
    this.diagnostics.add(code, message, this.wordSpan(place));
    return true;
  }

  #define(definition: Definition, index: number): void {
    const first = this.#definition.get(definition.name);
    if (first < 0) {
      this.#definition.set(definition.name, index);
      return;
    }
    if ('template' in definition) {
      this.#choose(definition, index, first);
      return;
    }
    const name = this.text(definition.name);
    const message = `${name} is defined already; leave out one of the two definitions`;
    this.diagnostics.add('module-redefined', message, this.wordSpan(definition.nameStart), [
      {
        message: 'the first definition is here',
        span: this.wordSpan(this.#at(first).nameStart),
      },
    ]);
  }

  /** Which of two models of a cell decides: that of the file named first. */
  #choose(cell: LibraryCell, index: number, other: number): void {
    const { name, nameStart } = cell;
    const otherStart = this.#at(other).nameStart;
    if (!cell.precedes(otherStart)) {
      this.#twins.set(other, { name, chosen: otherStart, other: nameStart });
      return;
    }
    this.#definition.set(name, index);
    this.#twins.set(index, { name, chosen: nameStart, other: otherStart });
  }

  #at(index: number): Definition {
    const { modules, primitives, cells } = this;
    if (index < modules.length) return modules[index]!;
    const place = index - modules.length;
    return place < primitives.length ? primitives[place]! : cells[place - primitives.length]!;
  }
}
