import type { Diagnostics } from '../../../diagnostics/diagnostics.js';
import type { Span } from '../../../diagnostics/source.js';
import type { Position, SourceMap } from '../../../diagnostics/sourceMap.js';
import type { NameId, NameTable } from '../../names.js';
import type { ModuleSyntax, PrimitiveSyntax, VerilogSyntax } from '../syntax.js';
import { LimitedReport, wordSpan } from './messages.js';
import { NameIndex } from './nameIndex.js';
import { noOverrides, type Overrides, overridesKey } from './overrides.js';
import type { Template } from './template.js';
import { UnknownModules } from './unknownModules.js';

/** How the templates of a design are made. */
export interface TemplateMakers {
  module(design: Design, module: ModuleSyntax, overrides: Overrides): Template;
  primitive(design: Design, primitive: PrimitiveSyntax): Template;
}

/** Value of `Design.template` where there is none because of an error. */
export const NO_TEMPLATE = -1;

// Deeper than any design; a recursion whose parameters never settle is stopped here.
const MAX_DEPTH = 300;
const MAX_UNDRIVEN = 50;

/** All modules and primitives by name, and the templates made of them so far. */
export class Design {
  readonly names: NameTable;
  readonly sources: SourceMap;
  readonly diagnostics: Diagnostics;
  readonly modules: readonly ModuleSyntax[];
  readonly primitives: readonly PrimitiveSyntax[];
  readonly templates: Template[] = [];
  readonly unknown: UnknownModules;
  readonly undriven: LimitedReport;
  readonly #makers: TemplateMakers;
  /** Index into `modules` by name, or into `primitives` beyond them. */
  readonly #definition = new NameIndex(64);
  /** Template of each definition without overrides, + 1; 0 for none yet. */
  readonly #plain: Int32Array;
  readonly #specialised = new Map<string, number>();
  readonly #parameters = new Map<NameId, readonly NameId[]>();
  readonly #open: { readonly key: string; readonly module: ModuleSyntax }[] = [];

  constructor(
    syntax: VerilogSyntax,
    sources: SourceMap,
    diagnostics: Diagnostics,
    makers: TemplateMakers,
  ) {
    this.names = syntax.names;
    this.sources = sources;
    this.diagnostics = diagnostics;
    this.modules = syntax.modules;
    this.primitives = syntax.primitives;
    this.#makers = makers;
    this.unknown = new UnknownModules(this);
    this.undriven = new LimitedReport('net-undriven', MAX_UNDRIVEN);
    this.#plain = new Int32Array(this.modules.length + this.primitives.length);
    for (const [index, definition] of [...this.modules, ...this.primitives].entries()) {
      this.#define(definition, index);
    }
  }

  /** The module or primitive with a name. */
  definition(name: NameId): ModuleSyntax | PrimitiveSyntax | undefined {
    const index = this.#definition.get(name);
    return index < 0 ? undefined : this.#at(index);
  }

  isPrimitive(name: NameId): boolean {
    return this.#definition.get(name) >= this.modules.length;
  }

  /**
   * Index of the template of a module or primitive with the given parameter values, made when
   * first asked for. `NO_TEMPLATE` where the module contains itself, which is reported at `place`.
   * The name must be defined.
   */
  template(name: NameId, overrides: Overrides, place: Position): number {
    const index = this.#definition.get(name);
    const key = overridesKey(overrides);
    if (key === '') {
      this.#plain[index] ||= this.#make(index, `${index}`, noOverrides, place) + 1;
      return this.#plain[index]! - 1;
    }
    const fullKey = `${index} ${key}`;
    const known = this.#specialised.get(fullKey);
    if (known !== undefined) return known;
    const made = this.#make(index, fullKey, overrides, place);
    this.#specialised.set(fullKey, made);
    return made;
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

  /** The span of the word that stands at a position. */
  wordSpan(position: Position): Span {
    const { source, start } = this.sources.span(position);
    return wordSpan(source, start);
  }

  #make(index: number, key: string, overrides: Overrides, place: Position): number {
    const definition = this.#at(index);
    if (!('items' in definition)) {
      return this.templates.push(this.#makers.primitive(this, definition)) - 1;
    }
    if (this.#isEndless(definition, key, place)) return NO_TEMPLATE;
    this.#open.push({ key, module: definition });
    const template = this.#makers.module(this, definition, overrides);
    this.#open.pop();
    return this.templates.push(template) - 1;
  }

  #isEndless(module: ModuleSyntax, key: string, place: Position): boolean {
    const again = this.#open.findIndex((each) => each.key === key);
    if (again < 0 && this.#open.length < MAX_DEPTH) return false;
    const cycle = this.#open.slice(Math.max(again, 0), Math.max(again, 0) + 20);
    const path = [...cycle.map((each) => this.text(each.module.name)), this.text(module.name)];
    const message = `module ${this.text(module.name)} contains itself: ${path.join(' > ')}`;
    this.diagnostics.add('module-recursive', message, this.wordSpan(place));
    return true;
  }

  #define(definition: ModuleSyntax | PrimitiveSyntax, index: number): void {
    const first = this.#definition.get(definition.name);
    if (first < 0) {
      this.#definition.set(definition.name, index);
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

  #at(index: number): ModuleSyntax | PrimitiveSyntax {
    const { modules, primitives } = this;
    return index < modules.length ? modules[index]! : primitives[index - modules.length]!;
  }
}
